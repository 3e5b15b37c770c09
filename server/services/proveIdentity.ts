import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { sha256 } from '../platform/hashes'
import { findPersonByEmail, type PersonRow } from '../queries/persons'
import { accountFailures, insertAttempt, sourceFailures } from '../queries/signInAttempts'
import { ACCOUNT_RULE, pauseAfter, secondsToWait, SOURCE_RULE, WINDOW_s } from './signInLimits'

export interface Claim { email: string, password: string, source: string }

const spareHashes = new WeakMap<Deps['passwords'], Promise<string>>()

/**
 * Proves with a password who somebody is, and counts the try. Accounts that exist and accounts that do not answer alike, in words and in time.
 * @param source address of the socket
 * @throws AppError('lockedOut') with data.retryAfter_s, AppError('wrongCredentials') with data.triesLeft
 */
export async function proveIdentity(deps: Deps, { email, password, source }: Claim): Promise<PersonRow> {
  const found = await findPersonByEmail(deps.db, email)
  const person = found?.state === 'active' ? found : null
  const accountKey = keyOf(person, email)
  await refuseWhilePaused(deps, { accountKey, source }, null)
  // Counted as a failure before the password is looked at: of many tries sent at once, only the free ones get that far.
  const attempt = deps.ids.next()
  await insertAttempt(deps.db, { id: attempt, accountKey, source, succeeded: false })
  await refuseWhilePaused(deps, { accountKey, source }, attempt)
  const matches = await deps.passwords.verify(person?.passwordHash ?? await spareHash(deps), password)
  if (!person || !matches) throw await wrongCredentials(deps, accountKey)
  await insertAttempt(deps.db, { id: deps.ids.next(), accountKey, source, succeeded: true })
  return person
}

/** Clears the count of an account after its password was set by another proof: a reset link. */
export async function clearFailures(deps: Deps, person: Pick<PersonRow, 'id' | 'email'>, source: string): Promise<void> {
  await insertAttempt(deps.db, { id: deps.ids.next(), accountKey: keyOf(person, person.email), source, succeeded: true })
}

/** By person where there is one, so that two spellings the database takes as one address share one count. */
const keyOf = (person: Pick<PersonRow, 'id'> | null, email: string): Buffer => sha256(person ? `person ${person.id}` : `email ${email}`)

async function refuseWhilePaused({ db }: Deps, { accountKey, source }: { accountKey: Buffer, source: string }, exceptId: string | null): Promise<void> {
  const wait_s = Math.max(
    secondsToWait(await accountFailures(db, accountKey, WINDOW_s, exceptId), ACCOUNT_RULE),
    secondsToWait(await sourceFailures(db, source, WINDOW_s, exceptId), SOURCE_RULE),
  )
  if (wait_s > 0) throw new AppError('lockedOut', `Too many failed tries. Sign-in is paused for ${inWords(wait_s)}.`, { data: { retryAfter_s: wait_s } })
}

async function wrongCredentials({ db }: Deps, accountKey: Buffer): Promise<AppError> {
  const { count } = await accountFailures(db, accountKey, WINDOW_s)
  const triesLeft = Math.max(0, ACCOUNT_RULE.free - count)
  const next = triesLeft > 0
    ? `After ${triesLeft === 1 ? 'one more failed try' : `${triesLeft} more failed tries`}, sign-in with this address pauses.`
    : `Sign-in with this address is paused for ${inWords(pauseAfter(count, ACCOUNT_RULE))}.`
  return new AppError('wrongCredentials', `E-mail and password do not match. ${next}`, { field: 'password', data: { triesLeft, retryAfter_s: pauseAfter(count, ACCOUNT_RULE) } })
}

/** The same work for an address nobody has: a hash of the installation's own cost, made once. */
function spareHash({ passwords }: Deps): Promise<string> {
  const known = spareHashes.get(passwords) ?? passwords.hash('no account has this password')
  spareHashes.set(passwords, known)
  return known
}

const inWords = (seconds: number): string => seconds < 120 ? `${seconds} s` : `${Math.ceil(seconds / 60)} min`
