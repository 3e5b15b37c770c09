import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { PERMISSIONS, PROGRAMME_ROLES, type Permission, type Role } from '../../shared/permissions'
import { ApiClient, type ApiAnswer } from '../support/apiClient'
import { makeApiProgramme, makeClient, type ApiProgramme, type SignedClient } from '../support/apiPeople'
import { apiRoutes, type ApiRoute } from '../support/apiRoutes'
import { makeDeps } from '../support/factory'

const deps = makeDeps()
const routes = apiRoutes()
let mine: ApiProgramme
let other: ApiProgramme
let administrator: SignedClient
let nobody: ApiClient
beforeAll(async () => {
  mine = await makeApiProgramme(deps)
  other = await makeApiProgramme(deps)
  administrator = await makeClient(deps, { isAdministrator: true })
  nobody = await new ApiClient().open()
})
afterAll(() => deps.close())

// Signing out is allowed to everybody and would end the walk; the last test here looks at it.
const walked = routes.filter(route => route.file !== 'session/index.delete.ts')
const ask = (client: ApiClient, route: ApiRoute, code: string): Promise<ApiAnswer> =>
  client.send(route.path(code), { method: route.method, ...(route.method === 'GET' ? {} : { body: {} }) })
const messageOf = (answer: ApiAnswer) => (answer.body as { message?: string } | null)?.message

/** What the table says, read from its rows and not through the functions that the server uses. */
const tableAllows = (permission: Permission, roles: readonly Role[]) => roles.some(role => (PERMISSIONS[permission] as Record<Role, string>)[role] !== 'none')

/** Collects what is not as it should be, so that one run shows all of it. */
async function walk(client: ApiClient, code: string, expected: (route: ApiRoute) => number | 'allowed'): Promise<string[]> {
  const wrong: string[] = []
  for (const route of walked) {
    const want = expected(route)
    const { status, text } = await ask(client, route, code)
    const isRight = want === 'allowed' ? status !== 401 && status !== 403 && status < 500 : status === want
    if (!isRight) wrong.push(`${route.method} ${route.file} (${route.permission}): ${status}, not ${want}. ${text.slice(0, 160)}`)
  }
  return wrong
}

describe('every route × every role', () => {
  it('is walked: the files of server/api are found', () => {
    expect(walked.length).toBeGreaterThan(50)
    expect(walked.filter(route => route.isProgramme).length).toBeGreaterThan(25)
  })

  it('wants somebody signed in, unless it is open to everybody', async () => {
    expect(await walk(nobody, mine.code, route => route.permission === 'public' ? 'allowed' : 401)).toEqual([])
  })

  for (const role of PROGRAMME_ROLES) {
    it(`answers a ${role} in their own programme as the table says`, async () => {
      const expected = (route: ApiRoute) => route.permission === 'public' || tableAllows(route.permission, [role, 'member']) ? 'allowed' as const : 403
      expect(await walk(mine.people[role].client, mine.code, expected)).toEqual([])
    })

    it(`answers a ${role} in another programme as if it were not there`, async () => {
      const expected = (route: ApiRoute) => {
        if (route.permission === 'public') return 'allowed' as const
        if (route.isProgramme) return 404
        return tableAllows(route.permission, ['member']) ? 'allowed' as const : 403
      }
      expect(await walk(mine.people[role].client, other.code, expected)).toEqual([])
    })
  }

  it('keeps the administrator out of every programme, and lets them into the installation', async () => {
    const expected = (route: ApiRoute) => {
      if (route.permission === 'public') return 'allowed' as const
      if (route.isProgramme) return 404
      return tableAllows(route.permission, ['administrator', 'member']) ? 'allowed' as const : 403
    }
    expect(await walk(administrator.client, mine.code, expected)).toEqual([])
  })

  it('answers somebody else\'s programme and a missing one in the same words', async () => {
    for (const route of walked.filter(one => one.isProgramme)) {
      const [foreign, missing] = [await ask(mine.people.lead.client, route, other.code), await ask(mine.people.lead.client, route, 'no-such-programme')]
      expect([route.file, foreign.status, messageOf(foreign)]).toEqual([route.file, missing.status, messageOf(missing)])
    }
  })

  it('denies what no file answers', async () => {
    for (const path of ['/api/nothing', '/api/admin/nothing', `/api/programmes/${mine.code}/nothing`, `/api/programmes/${mine.code}`, '/api/session/../admin/people/x/y']) {
      expect([path, (await mine.people.lead.client.send(path)).status]).toEqual([path, 404])
      expect([path, (await nobody.send(path)).status]).toEqual([path, 401])
    }
    for (const method of ['POST', 'PUT', 'PATCH', 'DELETE']) {
      const answer = await mine.people.lead.client.send('/api/health', { method, body: {} })
      expect([method, [404, 405].includes(answer.status)]).toEqual([method, true])
    }
  })

  it('lets everybody sign out, and finds nobody afterwards', async () => {
    const { client } = await makeClient(deps)
    const kept = new Map(client.cookies)
    expect((await client.send('/api/session', { method: 'DELETE' })).status).toBe(200)
    expect((await client.send('/api/session')).body).toEqual({ signedIn: null })
    // The old cookie does not open anything either: the session has ended on the server.
    const thief = new ApiClient()
    for (const [name, value] of kept) thief.cookies.set(name, value)
    expect((await thief.send('/api/account/sessions')).status).toBe(401)
  })
})
