import { CAUTION } from '../../shared/caution'
import type { Deps } from '../platform/deps'
import { programmeAddressees, programmeCode } from '../queries/addresses'
import { fitExclusions } from '../queries/fits'
import type { Step } from './checkSteps'

/** Writes to everyone who entered what the step is about and is still in the programme, except whoever takes the step. */
export async function tellAuthors(deps: Pick<Deps, 'origin'>, { work, input, subject, seq }: Step, mail: { template: string, subject: string, lines: string[] }): Promise<void> {
  const authors = new Set(subject.enteredBy.map(one => one.personId).filter(id => id !== input.actor.personId))
  const people = (await programmeAddressees(work.trx, input.programmeId)).filter(one => authors.has(one.personId))
  const code = await programmeCode(work.trx, input.programmeId)
  for (const one of people) {
    await work.sendMail({
      to: one.email, subject: mail.subject, template: mail.template, dedupeKey: `${mail.template}:${input.id}:${seq}:${one.personId}`,
      body: [`${one.name},`, '', ...mail.lines, '', `${deps.origin}/${code}/checks/${input.kind}/${input.id}`, '', `Lanthorn. ${CAUTION}`].join('\n'),
    })
  }
}

export const nameOf = (subject: Step['subject']): string => `${subject.agentCode ?? 'no agent'}, ${subject.title}, version ${subject.versionNo}`

/** What others than the authors left out of a fit, with who and why: leaving out does not bar from signing, but the authors are told. */
export async function leftOutBy({ work, input, subject }: Step): Promise<string[]> {
  if (subject.kind !== 'fit') return []
  const others = (await fitExclusions(work.trx, input.programmeId, subject.id)).filter(one => !subject.enteredBy.some(author => author.personId === one.personId))
  if (others.length === 0) return []
  return ['', 'Left out of this version:', ...others.map(one => `- tube ${one.tubeNo}${one.pointIndex === null ? '' : `, point ${one.pointIndex + 1}`}, by ${one.personName}: ${one.reason}`)]
}
