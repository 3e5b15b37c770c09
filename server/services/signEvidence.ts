import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { checkEvents } from '../queries/checks'
import { leftOutBy, nameOf, tellAuthors } from './checkMail'
import { secondSignature, signingBar, type StepInput, takeStep } from './checkSteps'

/**
 * Puts a person's name to a version. Where much was left out or the slope moved far, the first signature waits for a second one by somebody else.
 * Decisions that rest on older numbers are looked at again by a job (ground.notice).
 */
export function signEvidence(deps: Deps, input: StepInput) {
  return takeStep(deps, input, {
    name: 'signEvidence',
    carries: true,
    check(subject) {
      const bar = signingBar(subject, input.actor.personId)
      if (bar) throw new AppError('notAllowed', bar)
    },
    async event(trx, subject) {
      const needed = await secondSignature(trx, subject, input.programmeId)
      const last = (await checkEvents(trx, input.programmeId, input.id)).at(-1)
      if (last?.event !== 'firstSigned') return needed ? 'firstSigned' : 'signed'
      if (last.personId === input.actor.personId) throw new AppError('notAllowed', 'You gave the first signature; the second one is somebody else\'s.')
      return 'signed'
    },
    async also(step) {
      const { work, subject, seq, event } = step
      const first = event === 'firstSigned'
      await tellAuthors(deps, step, {
        template: first ? 'check.firstSigned' : 'check.signed',
        subject: `${first ? 'Signed once' : 'Signed'}: ${nameOf(subject)}`,
        lines: [`${input.actor.name} ${first ? 'gave the first of two signatures to' : 'signed'} ${nameOf(subject)}.`, ...(input.comment.trim() ? ['', input.comment.trim()] : []), ...await leftOutBy(step)],
      })
      if (!first) await work.enqueue({ kind: 'ground.notice', dedupeKey: `ground:${input.id}:${seq}`, payload: { programmeId: input.programmeId, complexId: subject.complexId, cause: `signed:${input.id}:${seq}` }, maxAttempts: 5 })
    },
  })
}
