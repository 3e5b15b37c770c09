import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { appendCheckEvent, waitingSiblings } from '../queries/checks'
import type { CheckSubject } from '../queries/checkSubjects'
import { type Step, type StepInput, takeStep } from './checkSteps'

/** Why this subject cannot be sent for checking; null = it can. */
export function submitBar(subject: CheckSubject): string | null {
  if (subject.barred === 'refused') return 'This fit was refused; there is no number to check.'
  if (subject.barred === 'withdrawn') return 'The series was withdrawn.'
  if (subject.barred === 'replaced') return 'The conditions were corrected; send the corrected series.'
  if (subject.versionNo !== subject.newestVersionNo) return `Version ${subject.newestVersionNo} is newer; send that one.`
  return null
}

/** Sends a fit, a record or a batch for checking. An older version that still waits is recalled: only one version of a chain stands in the queue. */
export function submitForCheck(deps: Deps, input: StepInput) {
  return takeStep(deps, input, {
    name: 'submitForCheck',
    event: async () => 'waiting',
    check(subject) {
      const bar = submitBar(subject)
      if (bar) throw new AppError('conflict', bar)
    },
    also: recallSiblings,
  })
}

async function recallSiblings({ work, input, subject }: Step): Promise<void> {
  for (const other of await waitingSiblings(work.trx, input.programmeId, input.kind, subject.chainId, input.id)) {
    await appendCheckEvent(work.trx, {
      id: work.id(), programmeId: input.programmeId, kind: input.kind, subjectId: other.subjectId, seq: other.seq + 1, event: 'recalled',
      comment: `Version ${subject.versionNo} was sent instead.`, personId: input.actor.personId, at: work.now,
    })
  }
}
