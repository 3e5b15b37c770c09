import { PROGRAMME_ROLES, type ProgrammeRole } from '../../shared/permissions'
import { writeMembership } from '../../server/queries/memberships'
import { createProgramme } from '../../server/services/programmes'
import { makeAccount, PASSWORD } from './actors'
import { ApiClient } from './apiClient'
import type { TestDeps } from './factory'

export interface SignedClient { personId: string, email: string, client: ApiClient }
export interface ApiProgramme { id: string, code: string, people: Record<ProgrammeRole, SignedClient> }

/** Somebody with an account who is signed in over HTTP. */
export async function makeClient(deps: TestDeps, options: Parameters<typeof makeAccount>[1] = {}): Promise<SignedClient> {
  const account = await makeAccount(deps, options)
  const client = await new ApiClient().open()
  const answer = await client.signIn(account.email, PASSWORD)
  if (answer.status !== 200) throw new Error(`Signing in failed with ${answer.status}: ${answer.text}`)
  return { ...account, client }
}

/** A programme with one signed-in person per role. */
export async function makeApiProgramme(deps: TestDeps): Promise<ApiProgramme> {
  const { programmeId: id, code } = await createProgramme(deps, { actor: null, code: `api-${deps.ids.next().slice(-12)}`, name: 'For a test', description: '' })
  const people = {} as Record<ProgrammeRole, SignedClient>
  for (const role of PROGRAMME_ROLES) people[role] = await makeMember(deps, id, [role])
  return { id, code, people }
}

export async function makeMember(deps: TestDeps, programmeId: string, roles: ProgrammeRole[]): Promise<SignedClient> {
  const one = await makeClient(deps, { name: roles.join(' ') })
  await writeMembership(deps.db, { id: deps.ids.next(), programmeId, personId: one.personId, roles, changedBy: null, at: deps.clock.now() })
  return one
}
