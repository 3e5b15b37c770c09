import { z } from 'zod'
import { findMail, insertMailAttempt, wasSent } from '../queries/mail'
import { defineJob } from './define'

/** Sends one mail of the outbox and notes how it went; a mail that went out is not sent again when the job is. */
export const sendMail = defineJob({
  kind: 'mail.send',
  payload: z.object({ mailId: z.uuid() }),
  limitSeconds: 60,
  async run(deps, { payload }) {
    const mail = await findMail(deps.db, payload.mailId)
    if (!mail) throw new Error(`There is no mail ${payload.mailId}.`)
    if (await wasSent(deps.db, mail.id)) return
    const attempt = { id: deps.ids.next(), mailId: mail.id, at: deps.clock.now() }
    try {
      const messageId = await deps.mailer.send(mail)
      await insertMailAttempt(deps.db, { ...attempt, succeeded: true, messageId, error: null })
    }
    catch (error) {
      await insertMailAttempt(deps.db, { ...attempt, succeeded: false, messageId: null, error: String(error) })
      throw error
    }
  },
})
