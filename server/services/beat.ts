import type { Deps } from '../platform/deps'
import { beat as writeBeat } from '../queries/processes'
import { engineOf } from './engine'

/** A web process's sign of life. */
export function beat({ db, ear }: Pick<Deps, 'db' | 'ear'>, { name, startedAt }: { name: string, startedAt: Date }): Promise<void> {
  return writeBeat(db, { name, role: 'web', startedAt, engine: engineOf(), wakePort: ear.port() })
}
