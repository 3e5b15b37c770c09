import type { Deps } from '../platform/deps'
import { makeToken } from '../platform/tokens'
import { findPersonByEmail } from '../queries/persons'
import { insertToken, voidTokens } from '../queries/tokens'
import { finishJob, type JobRow } from '../queries/jobs'
import { unitOfWork } from './unitOfWork'

export const RESET_MINUTES = 60

/** Makes a reset link and writes the mail with it; older links of the person stop working. Nothing happens for an address without an account. */
export async function sendResetLink(deps: Deps, { email, job }: { email: string, job: Pick<JobRow, 'id' | 'fence'> }): Promise<void> {
  const person = await findPersonByEmail(deps.db, email)
  if (!person || person.state === 'removed') return
  const { token, hash } = makeToken()
  await unitOfWork(deps, { actor: null, name: 'sendResetLink', programmeId: null }, async ({ trx, id, now, sendMail }) => {
    if (!await finishJob(trx, job, now)) throw new Error('The lease of this job was lost.')
    await voidTokens(trx, 'resetPassword', person.id)
    await insertToken(trx, { id: id(), purpose: 'resetPassword', hash, personId: person.id, minutes: RESET_MINUTES, at: now })
    await sendMail({
      to: person.email, subject: 'Set a new password for Lanthorn', template: 'account.reset', dedupeKey: `reset:${job.id}`,
      body: `Dear ${person.name},\n\nwith this link you set a new password, once and within ${RESET_MINUTES} minutes:\n\n${deps.origin}/reset/${token}\n\nWhoever did not ask for it need do nothing; the present password stays.\n`,
    })
    return { result: undefined, subject: `person ${person.id}`, payload: {} }
  })
}
