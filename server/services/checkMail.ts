import type { Deps } from '../platform/deps'
import { addressees, programmeCode } from '../queries/addresses'
import type { Step } from './checkSteps'

/** Writes to everyone who entered what the step is about, except whoever takes the step. */
export async function tellAuthors(deps: Pick<Deps, 'origin'>, { work, input, subject, seq }: Step, mail: { template: string, subject: string, lines: string[] }): Promise<void> {
  const people = await addressees(work.trx, subject.enteredBy.map(one => one.personId).filter(id => id !== input.actor.personId))
  const code = await programmeCode(work.trx, input.programmeId)
  for (const one of people) {
    await work.sendMail({
      to: one.email, subject: mail.subject, template: mail.template, dedupeKey: `${mail.template}:${input.id}:${seq}:${one.personId}`,
      body: [`${one.name},`, '', ...mail.lines, '', `${deps.origin}/${code}/checks/${input.kind}/${input.id}`, '', 'Lanthorn. Screening research only; not for diagnosis, dosing or release of a product.'].join('\n'),
    })
  }
}

export const nameOf = (subject: Step['subject']): string => `${subject.agentCode ?? 'no agent'}, ${subject.title}, version ${subject.versionNo}`
