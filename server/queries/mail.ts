import type { Knex } from 'knex'
import { isDuplicate } from '../platform/database'
import { fromBinary, toBinary, toBinaryOrNull } from '../platform/ids'

export interface NewMail {
  id: string
  programmeId: string | null
  to: string
  subject: string
  body: string
  template: string
  /** The same key again is the same mail: a command tried twice writes once. */
  dedupeKey: string
  at: Date
}

/** @returns false when this mail was written before */
export async function insertMail(trx: Knex, mail: NewMail): Promise<boolean> {
  try {
    await trx('mail').insert({
      id: toBinary(mail.id), programme_id: toBinaryOrNull(mail.programmeId), to_address: mail.to, subject: mail.subject, body: mail.body, template: mail.template,
      dedupe_key: mail.dedupeKey, created_at: mail.at,
    })
    return true
  }
  catch (error) {
    if (isDuplicate(error, 'dedupe')) return false
    throw error
  }
}

export interface MailRow { id: string, to: string, subject: string, body: string, template: string, createdAt: Date }
interface Raw { id: Buffer, to_address: string, subject: string, body: string, template: string, created_at: Date }
const toMail = (row: Raw): MailRow => ({ id: fromBinary(row.id), to: row.to_address, subject: row.subject, body: row.body, template: row.template, createdAt: row.created_at })

export async function findMail(db: Knex, id: string): Promise<MailRow | null> {
  const row = await db('mail').where({ id: toBinary(id) }).first('*') as Raw | undefined
  return row ? toMail(row) : null
}

export async function wasSent(db: Knex, mailId: string): Promise<boolean> {
  return Boolean(await db('mail_attempt').where({ mail_id: toBinary(mailId), succeeded: true }).first('id'))
}

export async function insertMailAttempt(db: Knex, attempt: { id: string, mailId: string, at: Date, succeeded: boolean, messageId: string | null, error: string | null }): Promise<void> {
  await db('mail_attempt').insert({ id: toBinary(attempt.id), mail_id: toBinary(attempt.mailId), at: attempt.at, succeeded: attempt.succeeded, message_id: attempt.messageId, error: attempt.error })
}

/** Newest mails with how their sending went, for the administrator's page. */
export async function newestMail(db: Knex, { limit, offset }: { limit: number, offset: number }) {
  const rows = await db('mail').orderBy('created_at', 'desc').orderBy('id', 'desc').limit(limit).offset(offset)
    .select('mail.*', db.raw('(SELECT COUNT(*) FROM mail_attempt a WHERE a.mail_id = mail.id AND a.succeeded) AS sent'),
      db.raw('(SELECT COUNT(*) FROM mail_attempt a WHERE a.mail_id = mail.id) AS attempts'),
      db.raw('(SELECT a.error FROM mail_attempt a WHERE a.mail_id = mail.id ORDER BY a.at DESC LIMIT 1) AS last_error')) as (Raw & { sent: number, attempts: number, last_error: string | null })[]
  return rows.map(row => ({ ...toMail(row), sent: Number(row.sent) > 0, attempts: Number(row.attempts), lastError: row.last_error }))
}
