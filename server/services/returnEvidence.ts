import type { Deps } from '../platform/deps'
import { nameOf, tellAuthors } from './checkMail'
import { type StepInput, takeStep } from './checkSteps'

/** Gives a version back with a comment, by mail to whoever entered it. */
export function returnEvidence(deps: Deps, input: StepInput) {
  return takeStep(deps, input, {
    name: 'returnEvidence',
    carries: true,
    event: async () => 'returned',
    also: step => tellAuthors(deps, step, {
      template: 'check.returned', subject: `Returned: ${nameOf(step.subject)}`,
      lines: [`${input.actor.name} returned ${nameOf(step.subject)}:`, '', input.comment.trim()],
    }),
  })
}

/** Takes a version out of the queue again, by whoever may send it. */
export function recallCheck(deps: Deps, input: StepInput) {
  return takeStep(deps, input, { name: 'recallCheck', event: async () => 'recalled', also: async () => undefined })
}

/** Takes a signature back, with a reason: the number leaves the map, and decisions that rest on it are told. */
export function withdrawSignature(deps: Deps, input: StepInput) {
  return takeStep(deps, input, {
    name: 'withdrawSignature',
    event: async () => 'withdrawn',
    async also(step) {
      const { work, subject, seq } = step
      await tellAuthors(deps, step, { template: 'check.withdrawn', subject: `Signature withdrawn: ${nameOf(subject)}`, lines: [`${input.actor.name} withdrew the signature of ${nameOf(subject)}:`, '', input.comment.trim()] })
      await work.enqueue({ kind: 'ground.notice', dedupeKey: `ground:${input.id}:${seq}`, payload: { programmeId: input.programmeId, complexId: subject.complexId, cause: `withdrawn:${input.id}:${seq}` }, maxAttempts: 5 })
    },
  })
}
