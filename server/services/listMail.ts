import type { z } from 'zod'
import type { MailPage } from '../../shared/schemas/installation'
import type { Deps } from '../platform/deps'
import { newestMail } from '../queries/mail'

const PAGE = 50
/** Links of these open an account; behind a real mail server they are for the receiver's eyes. */
const LINK = /\/(invitation|reset)\/[\w-]{43}/g

/**
 * What was sent, newest first. isCaught: no mail server is set, so this page is the only way a message reaches anybody and shows links whole;
 * otherwise an administrator could sign in as somebody else with a reset link.
 */
export async function listMail({ db }: Pick<Deps, 'db'>, { page, isCaught }: { page: number, isCaught: boolean }): Promise<z.output<typeof MailPage>> {
  const rows = await newestMail(db, { limit: PAGE + 1, offset: page * PAGE })
  const mail = rows.slice(0, PAGE).map(row => ({
    id: row.id, to: row.to, subject: row.subject, body: isCaught ? row.body : row.body.replaceAll(LINK, '/$1/[in the mail only]'), createdAt: row.createdAt.toISOString(),
    sent: row.sent, attempts: row.attempts, lastError: row.lastError,
  }))
  return { mail, more: rows.length > PAGE, isCaught }
}
