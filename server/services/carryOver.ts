import type { Knex } from 'knex'
import type { CheckState } from '../../shared/checks/transitions'
import { AppError } from '../../shared/errors'
import { appendCheckEvent, waitingSiblings, type WaitingSibling } from '../queries/checks'
import type { CheckSubject } from '../queries/checkSubjects'
import type { StepInput } from './checkSteps'
import type { Work } from './unitOfWork'

/** Why this subject cannot be sent for checking; null = it can. */
export function submitBar(subject: CheckSubject): string | null {
  if (subject.barred === 'refused') return 'This fit was refused; there is no number to check.'
  if (subject.barred === 'withdrawn') return 'The series was withdrawn.'
  if (subject.barred === 'replaced') return 'The conditions were corrected; send the corrected series.'
  if (subject.versionNo !== subject.newestVersionNo) return `Version ${subject.newestVersionNo} is newer; send that one.`
  return null
}

interface Recall { input: StepInput, subject: CheckSubject, comment: string }

/** Takes every other waiting version of the chain out of the queue. @returns how many there were */
export async function recallWaiting(work: Work, { input, subject, comment }: Recall): Promise<number> {
  const { programmeId, kind, actor } = input
  const waiting = await waitingSiblings(work.trx, { programmeId, kind, chainId: subject.chainId, exceptId: subject.id }, { lock: true })
  for (const other of waiting) {
    await appendCheckEvent(work.trx, { id: work.id(), programmeId, kind, subjectId: other.subjectId, seq: other.seq + 1, event: 'recalled', comment, personId: actor.personId, at: work.now })
  }
  return waiting.length
}

/**
 * The waiting version whose place in the queue this one takes when it is signed or returned: a fit that somebody made while checking, rather than one that
 * its author has not sent yet. null = there is none.
 */
export async function placeInQueue(db: Knex, programmeId: string, subject: CheckSubject, state: CheckState): Promise<WaitingSibling | null> {
  if (state !== 'draft' || subject.kind !== 'fit' || subject.madeBy === null || subject.enteredBy.some(one => one.personId === subject.madeBy)) return null
  return (await waitingSiblings(db, { programmeId, kind: subject.kind, chainId: subject.chainId, exceptId: subject.id })).at(-1) ?? null
}

/**
 * Puts a version that was made while checking into the place of the one that waits, in the transaction that signs or returns it: the uploader need not send
 * it again, and of two people who answer two versions of one chain at once the second meets a conflict.
 * @returns where the version stands after it
 */
export async function carryOver(work: Work, input: StepInput, subject: CheckSubject, current: { state: CheckState, seq: number }): Promise<{ state: CheckState, seq: number }> {
  const before = await placeInQueue(work.trx, input.programmeId, subject, current.state)
  if (!before) return current
  const bar = submitBar(subject)
  if (bar) throw new AppError('conflict', bar)
  const recalled = await recallWaiting(work, { input, subject, comment: `Version ${subject.versionNo} took its place.` })
  if (recalled === 0) throw new AppError('conflict', `Version ${before.versionNo}, whose place this one would take, was answered meanwhile. Look at it first.`)
  const seq = current.seq + 1
  await appendCheckEvent(work.trx, {
    id: work.id(), programmeId: input.programmeId, kind: input.kind, subjectId: subject.id, seq, event: 'waiting', comment: `Took the place of version ${before.versionNo}.`,
    personId: input.actor.personId, at: work.now,
  })
  return { state: 'waiting', seq }
}
