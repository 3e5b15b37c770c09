import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export interface PersonRow {
  id: string
  email: string
  name: string
  passwordHash: string
  isAdministrator: boolean
  isDemo: boolean
  state: 'active' | 'removed'
  sessionEpoch: number
  /** JSON text as it was stored. */
  preferences: string
  createdAt: Date
}

interface Raw {
  id: Buffer, email_ci: string, name: string, password_hash: string, is_administrator: number, is_demo: number, state: 'active' | 'removed', session_epoch: number,
  preferences: string, created_at: Date
}

const toPerson = (row: Raw): PersonRow => ({
  id: fromBinary(row.id), email: row.email_ci, name: row.name, passwordHash: row.password_hash, isAdministrator: Boolean(row.is_administrator), isDemo: Boolean(row.is_demo),
  state: row.state, sessionEpoch: row.session_epoch, preferences: row.preferences, createdAt: row.created_at,
})

/** Anyone who ever had an account under the address, also who was removed. */
export async function findPersonByEmail(db: Knex, email: string): Promise<PersonRow | null> {
  const row = await db('person').where({ email_ci: email }).first('*') as Raw | undefined
  return row ? toPerson(row) : null
}

export async function findPerson(db: Knex, id: string, { lock = false } = {}): Promise<PersonRow | null> {
  const query = db('person').where({ id: toBinary(id) })
  const row = await (lock ? query.forUpdate() : query).first('*') as Raw | undefined
  return row ? toPerson(row) : null
}

export async function listPersons(db: Knex): Promise<PersonRow[]> {
  const rows = await db('person').where({ state: 'active' }).orderBy('name').orderBy('id') as Raw[]
  return rows.map(toPerson)
}

export async function listDemoPersons(db: Knex): Promise<PersonRow[]> {
  const rows = await db('person').where({ state: 'active', is_demo: true }).orderBy('created_at').orderBy('id') as Raw[]
  return rows.map(toPerson)
}

export async function countPersons(db: Knex): Promise<number> {
  const row = await db('person').where({ state: 'active' }).count({ n: '*' }).first() as { n: number }
  return Number(row.n)
}

export interface NewPerson { id: string, email: string, name: string, passwordHash: string, isAdministrator: boolean, isDemo: boolean, at: Date }

/** @throws a duplicate on the key `email` when the address is taken */
export async function insertPerson(trx: Knex, one: NewPerson): Promise<void> {
  await trx('person').insert({
    id: toBinary(one.id), email_ci: one.email, name: one.name, password_hash: one.passwordHash, is_administrator: one.isAdministrator, is_demo: one.isDemo, preferences: '{}', created_at: one.at,
  })
}

/** Gives a removed person the account back, under a new name and password and without what they were before. */
export async function restorePerson(trx: Knex, one: { id: string, name: string, passwordHash: string }): Promise<void> {
  await trx('person').where({ id: toBinary(one.id), state: 'removed' })
    .update({ state: 'active', name: one.name, password_hash: one.passwordHash, is_administrator: false, session_epoch: trx.raw('session_epoch + 1') })
}

export async function updatePerson(trx: Knex, id: string, change: { name?: string, passwordHash?: string, isAdministrator?: boolean, preferences?: string, state?: 'removed' }): Promise<void> {
  const { name, passwordHash: password_hash, isAdministrator: is_administrator, preferences, state } = change
  const columns = Object.fromEntries(Object.entries({ name, password_hash, is_administrator, preferences, state }).filter(([, value]) => value !== undefined))
  await trx('person').where({ id: toBinary(id) }).update(columns)
}

/** Administrators who can still sign in, locked: two who remove each other at once must not leave none. */
export async function lockAdministrators(trx: Knex.Transaction): Promise<string[]> {
  const rows = await trx('person').where({ is_administrator: true, state: 'active' }).orderBy('id').forUpdate().select('id') as { id: Buffer }[]
  return rows.map(row => fromBinary(row.id))
}

/** Makes people known as demo accounts, whose password everybody knows. */
export async function markDemoPersons(db: Knex, ids: readonly string[]): Promise<void> {
  await db('person').whereIn('id', ids.map(toBinary)).update({ is_demo: true })
}
