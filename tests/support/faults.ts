import type { Knex } from 'knex'
import type { TestDeps } from './factory'

/** What a query fails with when its turn has come. */
export class PlantedFault extends Error {
  constructor(query: number, sql: string) {
    super(`Planted fault at query ${query}: ${sql}`)
    this.name = 'PlantedFault'
  }
}

interface Statement { sql: string }
type RunQuery = (this: { config: unknown }, connection: unknown, statement: Statement) => Promise<unknown>
interface Client { config: unknown, _query: RunQuery }

/**
 * Runs `attempt` with query number `failAt` of this Knex failing before it reaches the database; 0 = none fails. BEGIN and COMMIT count. Only one run
 * at a time may go through the same Knex. A ROLLBACK is let through, and a COMMIT that fails undoes its transaction, as a lost connection would.
 */
export async function withFault<T>(db: Knex, failAt: number, attempt: () => Promise<T>): Promise<{ outcome: PromiseSettledResult<T>, queries: number }> {
  // Transactions run on clients of their own, which share prototype and configuration with the pool's.
  const { config } = db.client as Client
  const prototype = Object.getPrototypeOf(db.client) as Client
  const original = prototype._query
  let queries = 0
  const planted: RunQuery = async function (connection, statement) {
    if (this.config !== config || /^rollback/i.test(statement.sql)) return original.call(this, connection, statement)
    queries++
    if (queries !== failAt) return original.call(this, connection, statement)
    if (/^commit/i.test(statement.sql)) await original.call(this, connection, { sql: 'ROLLBACK' })
    throw new PlantedFault(failAt, statement.sql)
  }
  Object.defineProperty(prototype, '_query', { value: planted, configurable: true, writable: true })
  try {
    const [outcome] = await Promise.allSettled([attempt()])
    return { outcome: outcome!, queries }
  }
  finally {
    Reflect.deleteProperty(prototype, '_query')
  }
}

export interface FaultLoop<T> {
  deps: Pick<TestDeps, 'db'>
  /** The command under test; called anew for each n. It may be called on data of its own, or on data that a failed call left as they were. */
  attempt: (n: number) => Promise<T>
  /** What is stored, as a value to compare: must be the same after each failed call as before it. */
  stored: () => Promise<unknown>
  /** Largest n, against a loop without end. */
  most?: number
}

/**
 * Fails query 1, 2, 3 … of a command until it comes through, and looks after each failure whether anything stayed behind.
 * @returns how many queries were failed, and the result of the call that came through
 * @throws Error when a failed call left something, or hid the fault
 */
export async function failEachQuery<T>({ deps, attempt, stored, most = 400 }: FaultLoop<T>): Promise<{ failed: number, result: T }> {
  for (let n = 1; n <= most; n++) {
    const before = JSON.stringify(await stored())
    const { outcome, queries } = await withFault(deps.db, n, () => attempt(n))
    if (outcome.status === 'fulfilled') {
      if (queries >= n) throw new Error(`The command came through although its query ${n} of ${queries} failed.`)
      return { failed: n - 1, result: outcome.value }
    }
    if (!(outcome.reason instanceof PlantedFault) && !String(outcome.reason).includes('Planted fault')) throw outcome.reason
    const after = JSON.stringify(await stored())
    if (after !== before) throw new Error(`Query ${n} failed and something stayed behind.\nbefore ${before}\nafter  ${after}`)
  }
  throw new Error(`The command still failed after ${most} queries.`)
}
