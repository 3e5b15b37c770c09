import type { Deps } from '../platform/deps'
import { listDemoPersons } from '../queries/persons'

/** How many demo accounts can sign in. */
export async function countDemoPersons({ db }: Pick<Deps, 'db'>): Promise<number> {
  return (await listDemoPersons(db)).length
}
