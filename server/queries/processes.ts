import type { Knex } from 'knex'

export interface Beat { name: string, role: 'web' | 'worker', startedAt: Date, engine: unknown, wakePort?: number | null }

/** Says that a process is alive, by the database's clock. */
export async function beat(db: Knex, one: Beat): Promise<void> {
  const changed = await db('process_beat').where({ name: one.name }).update({ seen_at: db.raw('NOW(6)'), wake_port: one.wakePort ?? null })
  if (changed === 0) await db('process_beat').insert({ name: one.name, role: one.role, started_at: one.startedAt, seen_at: db.raw('NOW(6)'), engine: JSON.stringify(one.engine), wake_port: one.wakePort ?? null })
  await db('process_beat').whereRaw('seen_at < DATE_SUB(NOW(6), INTERVAL 1 DAY)').delete()
}

export async function listProcesses(db: Knex) {
  const rows = await db('process_beat').orderBy('role').orderBy('name')
    .select('name', 'role', 'started_at', 'seen_at', 'engine', db.raw('TIMESTAMPDIFF(SECOND, seen_at, NOW(6)) AS silent_s')) as { name: string, role: 'web' | 'worker', started_at: Date, seen_at: Date, engine: string, silent_s: number }[]
  return rows.map(row => ({ name: row.name, role: row.role, startedAt: row.started_at, seenAt: row.seen_at, silent_s: Number(row.silent_s), engine: JSON.parse(row.engine) as Record<string, string> }))
}

const LISTENING_s = 20

/** Loopback ports of the processes on this machine that were alive a moment ago; the name of a process is its role, its host and its number. */
export async function wakePorts(db: Knex, host: string): Promise<number[]> {
  const rows = await db('process_beat').whereNotNull('wake_port').whereRaw('seen_at > DATE_SUB(NOW(6), INTERVAL ? SECOND)', [LISTENING_s]).select('name', 'wake_port') as { name: string, wake_port: number }[]
  return rows.filter(row => row.name.split(' ')[1] === host).map(row => row.wake_port)
}
