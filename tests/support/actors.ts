import type { Actor } from '../../shared/permissions'
import { insertPerson } from '../../server/queries/persons'
import { findActor } from '../../server/queries/people'
import { signIn } from '../../server/services/signIn'
import type { TestDeps } from './factory'

export const PASSWORD = 'a long test password'
let counter = 0

/** A person who can sign in, with an address nobody else has. */
export async function makeAccount(deps: TestDeps, { isAdministrator = false, name = 'Ada Test' } = {}): Promise<{ personId: string, email: string }> {
  const personId = deps.ids.next()
  const email = `person${counter++}.${personId.slice(-12)}@example.org`
  await insertPerson(deps.db, { id: personId, email, name, passwordHash: await deps.passwords.hash(PASSWORD), isAdministrator, isDemo: false, at: deps.clock.now() })
  return { personId, email }
}

let source = 0
/** An address of its own for each test, so that pauses by address do not reach from one to the next. */
export const nextSource = (): string => `10.0.${Math.floor(++source / 250)}.${source % 250} ${process.pid}`

/** Signs in and reads the actor as a request would. */
export async function signedIn(deps: TestDeps, email: string, password = PASSWORD): Promise<Actor> {
  const { sessionId } = await signIn(deps, { email, password, source: nextSource() })
  const actor = await findActor(deps.db, sessionId)
  if (!actor) throw new Error('The session just opened does not hold.')
  return actor
}

/** The 43-character token of the newest mail to an address. */
export async function tokenMailedTo(deps: TestDeps, email: string): Promise<string> {
  const row = await deps.db('mail').where({ to_address: email }).orderBy('created_at', 'desc').orderBy('id', 'desc').first('body') as { body: string } | undefined
  const token = row && /\/(?:invitation|reset)\/([\w-]{43})\s/.exec(row.body)?.[1]
  if (!token) throw new Error(`No mail with a link went to ${email}.`)
  return token
}

/** The AppError code and message a promise was refused with. */
export async function refusal(promise: Promise<unknown>): Promise<{ code: string, message: string, data: Record<string, unknown> }> {
  try {
    await promise
  }
  catch (error) {
    const { code, message, details } = error as { code: string, message: string, details?: { data?: Record<string, unknown> } }
    return { code, message, data: details?.data ?? {} }
  }
  throw new Error('This was not refused.')
}
