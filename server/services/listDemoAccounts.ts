import { DEMO_PASSWORD } from '../../shared/demo'
import { PROGRAMME_ROLES } from '../../shared/permissions'
import type { DemoAccounts } from '../../shared/schemas/session'
import type { Deps } from '../platform/deps'
import { namedMemberships } from '../queries/memberships'
import { listDemoPersons } from '../queries/persons'

/** The invented people whose password everybody knows; an empty list where no demo data is loaded. */
export async function listDemoAccounts({ db }: Pick<Deps, 'db'>): Promise<DemoAccounts> {
  const people = await listDemoPersons(db)
  if (people.length === 0) return { password: '', accounts: [] }
  const memberships = await namedMemberships(db)
  const accounts = people.map((person) => {
    const held = memberships.filter(one => one.personId === person.id).flatMap(one => one.roles)
    const roles = PROGRAMME_ROLES.filter(role => held.includes(role))
    return { name: person.name, email: person.email, roles: person.isAdministrator ? [...roles, 'administrator' as const] : roles }
  })
  return { password: DEMO_PASSWORD, accounts }
}
