import { AppError } from '../../shared/errors'
import { type CheckEvent, type CheckSubjectKind, MIN_COMMENT_LENGTH, mayFollow, needsComment, secondSignatureReason } from '../../shared/checks/transitions'
import type { Actor } from '../../shared/permissions'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { appendCheckEvent, checkEvents, findCheckState } from '../queries/checks'
import { type CheckSubject, findCheckSubject } from '../queries/checkSubjects'
import { readSignatureGround } from '../queries/signatureGround'
import type { Knex } from 'knex'
import { carryOver } from './carryOver'
import { unitOfWork, type Work } from './unitOfWork'

export interface StepInput {
  actor: Actor
  programmeId: string
  kind: CheckSubjectKind
  id: string
  expectedSeq: number
  comment: string
  idempotency?: { key: string, request: unknown } | undefined
}

export interface Step {
  work: Work
  input: StepInput
  subject: CheckSubject
  seq: number
  event: CheckEvent
}

export interface StepPlan {
  name: string
  /** The event to append; asked inside the transaction, where it may depend on what happened before. */
  event: (trx: Knex.Transaction, subject: CheckSubject) => Promise<CheckEvent>
  /** Whether a version made while checking may take the place of the one that waits. */
  carries?: boolean
  /** Refusals beyond the order of states. */
  check?: (subject: CheckSubject, input: StepInput) => void
  /** What else belongs to this step: mail, jobs, steps of other versions. */
  also: (step: Step) => Promise<void>
}

/** The step answers an older state. Who took the newer step is read afterwards: inside the transaction its snapshot may be older than that step. */
class StaleStep extends Error {}

const NOT_FOUND = 'There is no such fit or record in this programme.'

/**
 * One step of a check in one transaction: locks the subject's state, appends the event, runs what belongs to it. A step that answers an older
 * state, or loses against somebody else's, is a conflict that names who and when.
 */
export async function takeStep(deps: Deps, input: StepInput, plan: StepPlan): Promise<{ state: CheckEvent, seq: number }> {
  const { actor, programmeId, kind, id, idempotency } = input
  try {
    return await unitOfWork(deps, { actor, name: plan.name, programmeId, idempotency }, async (work) => {
      const subject = await findCheckSubject(work.trx, programmeId, kind, id)
      if (!subject) throw new AppError('notFound', NOT_FOUND)
      const current = await findCheckState(work.trx, programmeId, id, { lock: true })
      if (current.seq !== input.expectedSeq) throw new StaleStep()
      plan.check?.(subject, input)
      const standing = plan.carries ? await carryOver(work, input, subject, current) : current
      const event = await plan.event(work.trx, subject)
      refuseUnless(standing.state, event, input.comment)
      const seq = standing.seq + 1
      await appendCheckEvent(work.trx, { id: work.id(), programmeId, kind, subjectId: id, seq, event, comment: input.comment.trim(), personId: actor.personId, at: work.now })
      await plan.also({ work, input, subject, seq, event })
      return { result: { state: event, seq }, subject: `${kind} ${id}`, payload: { agent: subject.agentCode, title: subject.title, versionNo: subject.versionNo, event, comment: input.comment.trim() } }
    })
  }
  catch (error) {
    if (error instanceof StaleStep || isDuplicate(error, 'step')) throw await conflict(deps.db, input)
    throw error
  }
}

function refuseUnless(state: Parameters<typeof mayFollow>[0], event: CheckEvent, comment: string): void {
  if (!mayFollow(state, event)) throw new AppError('conflict', `This is ${WORDS[state]}; that step does not follow.`, { data: { state } })
  if (needsComment(state, event) && comment.trim().length < MIN_COMMENT_LENGTH) {
    throw new AppError('invalidInput', 'Say why: the words stay with this number for good.', { field: 'comment', accepted: `at least ${MIN_COMMENT_LENGTH} characters` })
  }
}

const WORDS = { draft: 'a draft', waiting: 'waiting for its check', firstSigned: 'signed once and waiting for a second signature', signed: 'signed', returned: 'returned', recalled: 'recalled', withdrawn: 'withdrawn' } as const

async function conflict(db: Knex, input: StepInput): Promise<AppError> {
  const events = await checkEvents(db, input.programmeId, input.id)
  const last = events.at(-1)
  if (!last) return new AppError('conflict', 'Somebody else changed this meanwhile. Look at it again.')
  const words = { waiting: 'sent it for checking', firstSigned: 'gave the first signature', signed: 'signed it', returned: 'returned it', recalled: 'recalled it', withdrawn: 'withdrew the signature' }[last.event]
  return new AppError('conflict', `${last.personName} ${words} before you, at ${last.at.toISOString()}.`, { data: { personName: last.personName, at: last.at.toISOString(), event: last.event, seq: last.seq } })
}

/** Why this person may not sign; null = they may. The signer is nobody who uploaded or typed what is signed. */
export function signingBar(subject: CheckSubject, personId: string): string | null {
  if (subject.barred === 'refused') return 'A refused fit has no number to sign.'
  if (subject.barred === 'withdrawn') return 'The series was withdrawn.'
  if (subject.barred === 'replaced') return 'The conditions of this series were corrected; the corrected series is the one to sign.'
  if (subject.enteredBy.some(one => one.personId === personId)) return 'You entered this yourself; somebody else signs it.'
  return null
}

/** Why two people must sign this subject, or null; records and batches need one signature. */
export async function secondSignature(db: Knex, subject: CheckSubject, programmeId: string): Promise<string | null> {
  if (subject.kind !== 'fit') return null
  const ground = await readSignatureGround(db, programmeId, subject.id)
  return ground ? secondSignatureReason(ground) : null
}
