import { MEASUREMENTS } from '../../shared/measurements/index'
import { loopbackBell, openEar } from '../platform/bell'
import { systemClock } from '../platform/clock'
import { openDatabase } from '../platform/database'
import type { Deps } from '../platform/deps'
import { randomIds } from '../platform/ids'
import { scryptPasswords } from '../platform/passwords'
import { folderStorage } from '../platform/storage'
import { threadReader } from '../platform/tableReader'

let deps: Deps | undefined

/** The one set of dependencies of this process, from the environment. @throws Error naming the variable that is missing */
export function useDeps(): Deps {
  if (deps) return deps
  const db = openDatabase(setting('DATABASE_URL'))
  deps = {
    db,
    bell: loopbackBell(db, reportBell),
    ear: openEar(reportBell),
    clock: systemClock,
    ids: randomIds,
    storage: folderStorage(setting('LANTHORN_STORAGE')),
    passwords: scryptPasswords(),
    tables: threadReader(),
    kinds: MEASUREMENTS,
    origin: process.env.LANTHORN_ORIGIN ?? `http://${process.env.HOST ?? '127.0.0.1'}:${process.env.PORT ?? '3000'}`,
  }
  return deps
}

const reportBell = (error: unknown): void => console.error(JSON.stringify({ bell: String(error) }))

export async function closeDeps(): Promise<void> {
  deps?.ear.close()
  await deps?.db.destroy()
  deps = undefined
}

function setting(name: string): string {
  const value = process.env[name]
  if (!value) throw new Error(`${name} is not set; npm start sets it.`)
  return value
}
