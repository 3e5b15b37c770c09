import type { Knex } from 'knex'
import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import { isDuplicate, isRetryable } from '../platform/database'
import type { Deps } from '../platform/deps'
import { sealed, sha256 } from '../platform/hashes'
import { appendAudit, lockAuditHead } from '../queries/audit'
import { findRemembered, remember } from '../queries/idempotency'
import { insertJob, type NewJob } from '../queries/jobs'
import { insertMail, type NewMail } from '../queries/mail'

/** The chain of what concerns no programme: people, programmes, the machine. */
export const INSTALLATION_CHAIN = '00000000-0000-7000-8000-000000000000'

/** The worker and the loader act for nobody. */
export type Doer = Pick<Actor, 'personId' | 'name'> | null

export interface Command {
  actor: Doer
  /** The service's name, as the audit trail shows it. */
  name: string
  /** null = the installation's chain */
  programmeId: string | null
  /** Sent by the browser with a command; the same key and request again answers what was answered before. */
  idempotency?: { key: string, request: unknown } | undefined
}

export interface Work {
  trx: Knex.Transaction
  /** Domain time of the whole command. */
  now: Date
  id: () => string
  /** @returns the job's id, also when the same dedupe key stood there before */
  enqueue: (job: Omit<NewJob, 'id' | 'at' | 'programmeId'>) => Promise<string>
  /** Writes a mail and the job that sends it, in this transaction: an outbox. */
  sendMail: (mail: Omit<NewMail, 'id' | 'at' | 'programmeId'>) => Promise<void>
}

export interface Done<T> { result: T, subject: string, payload: unknown }

const ATTEMPTS = 4

/**
 * Runs one command whole or not at all: idempotency key, domain rows, jobs and mail (outbox), then the audit row, in one transaction.
 * Undone and tried again on deadlocks. `fn` must touch nothing but the transaction.
 * @throws AppError('conflict') when the idempotency key was used for another request; whatever fn throws
 */
export async function unitOfWork<T>(deps: Deps, command: Command, fn: (work: Work) => Promise<Done<T>>): Promise<T> {
  for (let attempt = 1; ; attempt++) {
    try {
      const { result, queued } = await deps.db.transaction(trx => runOnce(deps, command, trx, fn))
      if (queued > 0) deps.bell.ring()
      return result
    }
    catch (error) {
      const raced = isDuplicate(error, 'PRIMARY') || isDuplicate(error, 'link')
      if (attempt >= ATTEMPTS || !(isRetryable(error) || raced)) throw error
    }
  }
}

async function runOnce<T>(deps: Deps, command: Command, trx: Knex.Transaction, fn: (work: Work) => Promise<Done<T>>): Promise<{ result: T, queued: number }> {
  const before = await answeredBefore(command, trx)
  if (before) return { result: before.response as T, queued: 0 }
  const now = deps.clock.now()
  let queued = 0
  const { result, subject, payload } = await fn(makeWork(deps, command, trx, { now, count: () => { queued++ } }))
  if (command.actor && command.idempotency) {
    await remember(trx, { personId: command.actor.personId, key: command.idempotency.key, command: command.name, requestHash: requestHash(command), response: result, at: now })
  }
  await appendLink(deps, command, trx, { now, subject, payload })
  return { result, queued }
}

async function answeredBefore(command: Command, trx: Knex.Transaction) {
  if (!command.actor || !command.idempotency) return null
  const found = await findRemembered(trx, command.actor.personId, command.idempotency.key)
  if (found && (found.command !== command.name || !found.requestHash.equals(requestHash(command)))) {
    throw new AppError('conflict', 'This idempotency key was used for a different request.', { accepted: 'a new key for each new request' })
  }
  return found
}

const requestHash = (command: Command): Buffer => sha256(JSON.stringify(command.idempotency?.request ?? null))

function makeWork(deps: Deps, command: Command, trx: Knex.Transaction, { now, count }: { now: Date, count: () => void }): Work {
  const { programmeId } = command
  const enqueue: Work['enqueue'] = (job) => {
    count()
    return insertJob(trx, { ...job, id: deps.ids.next(), at: now, programmeId })
  }
  return {
    trx,
    now,
    id: () => deps.ids.next(),
    enqueue,
    async sendMail(mail) {
      const id = deps.ids.next()
      const isNew = await insertMail(trx, { ...mail, id, at: now, programmeId })
      if (isNew) await enqueue({ kind: 'mail.send', dedupeKey: `mail:${id}`, payload: { mailId: id }, maxAttempts: 8 })
    },
  }
}

async function appendLink(deps: Deps, command: Command, trx: Knex.Transaction, entry: { now: Date, subject: string, payload: unknown }): Promise<void> {
  const chainId = command.programmeId ?? INSTALLATION_CHAIN
  const head = await lockAuditHead(trx, chainId)
  const payload = sealed(entry.payload).text
  const seq = head.seq + 1
  const hash = linkHash({ chainId, seq, at: entry.now, personId: command.actor?.personId ?? null, command: command.name, subject: entry.subject, payload, previousHash: head.hash })
  await appendAudit(trx, { id: deps.ids.next(), chainId, seq, at: entry.now, personId: command.actor?.personId ?? null, command: command.name, subject: entry.subject, payload, previousHash: head.hash, hash })
}

/** SHA-256 over the canonical text of a link with the hash before it: whoever changes a row must change every later one. */
export function linkHash(link: { chainId: string, seq: number, at: Date, personId: string | null, command: string, subject: string, payload: string, previousHash: Buffer }): Buffer {
  // Named one by one: a stored link has more fields than are hashed.
  const { chainId, seq, at, personId, command, subject, payload, previousHash } = link
  return sealed({ chainId, seq, at: at.toISOString(), personId, command, subject, payload, previousHash: previousHash.toString('hex') }).hash
}
