import knex, { type Knex } from 'knex'

/** One pool on a DATABASE_URL. Times go in and out as UTC; DECIMAL and BIGINT are not used, so no numbers arrive as text. */
export function openDatabase(url: string, { maxConnections = 10 } = {}): Knex {
  return knex({
    client: 'mysql2',
    connection: { uri: url, timezone: 'Z', charset: 'utf8mb4' } as Knex.MySql2ConnectionConfig,
    pool: { min: 0, max: maxConnections },
  })
}

interface DatabaseError { errno: number, sqlMessage: string }
const isDatabaseError = (error: unknown): error is DatabaseError => typeof error === 'object' && error !== null && 'errno' in error && 'sqlMessage' in error

/** Whether an insert met a row that was there first; with a key's name, whether on that key. */
export function isDuplicate(error: unknown, key?: string): boolean {
  return isDatabaseError(error) && error.errno === 1062 && (!key || error.sqlMessage.includes(`'${key}'`) || error.sqlMessage.includes(`.${key}'`))
}

/** Deadlock (1213), lock wait timeout (1205) and record changed since last read (1020): the transaction was undone whole and may be tried again. */
export function isRetryable(error: unknown): boolean {
  return isDatabaseError(error) && (error.errno === 1213 || error.errno === 1205 || error.errno === 1020)
}
