import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { recallWaiting, submitBar } from './carryOver'
import { type Step, type StepInput, takeStep } from './checkSteps'

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
  await recallWaiting(work, { input, subject, comment: `Version ${subject.versionNo} was sent instead.` })
}
