import { request } from 'node:http'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { ACCOUNT_RULE } from '../../server/services/signInLimits'
import { makeAccount, PASSWORD, tokenMailedTo } from '../support/actors'
import { ApiClient } from '../support/apiClient'
import { makeApiProgramme, makeClient, makeMember, type ApiProgramme } from '../support/apiPeople'
import { makeDeps } from '../support/factory'

const deps = makeDeps()
let programme: ApiProgramme
beforeAll(async () => { programme = await makeApiProgramme(deps) })
afterAll(() => deps.close())

describe('a write', () => {
  it('without the CSRF token is refused, also from somebody signed in, and changes nothing', async () => {
    const { client } = programme.people.lead
    const put = (more: object) => client.send(`/api/programmes/${programme.code}/settings`, { method: 'PUT', body: { name: 'Changed', description: '', partnerSeesRawFiles: true }, ...more })
    expect((await put({ withoutToken: true })).status).toBe(403)
    expect((await put({ headers: { 'csrf-token': 'made-up' } })).status).toBe(403)
    expect((await client.send(`/api/programmes/${programme.code}/settings`)).body).toMatchObject({ name: 'For a test', partnerSeesRawFiles: false })
    expect((await put({})).status).toBe(200)
  })

  it('with the token of another browser is refused', async () => {
    const stranger = await new ApiClient().open()
    const { client } = programme.people.lead
    expect((await client.send('/api/account/name', { method: 'PUT', body: { name: 'X' }, headers: { 'csrf-token': stranger.token } })).status).toBe(403)
  })

  it('whose body has no declared length is refused with 411', async () => {
    const { client } = programme.people.chemist
    const status = await new Promise<number>((resolve, reject) => {
      const sent = request(`${inject('baseURL')}/api/account/name`, {
        method: 'PUT', headers: { 'content-type': 'application/json', 'transfer-encoding': 'chunked', 'csrf-token': client.token, 'cookie': [...client.cookies].map(pair => pair.join('=')).join('; ') },
      }, (answer) => {
        answer.resume()
        resolve(answer.statusCode ?? 0)
      })
      sent.on('error', reject)
      sent.end('{"name":"X"}')
    })
    expect(status).toBe(411)
  })

  it('that is too large is refused with 413 and says what would be accepted', async () => {
    const answer = await programme.people.chemist.client.send('/api/account/name', { method: 'PUT', body: { name: 'x'.repeat(300_000) } })
    expect(answer.status).toBe(413)
    expect(answer.body).toMatchObject({ data: { code: 'tooLarge', accepted: expect.stringContaining('bytes') as string } })
  })

  it('with a field nobody declared, or a body that is no JSON, is refused', async () => {
    const { client } = programme.people.chemist
    expect((await client.send('/api/account/name', { method: 'PUT', body: { name: 'X', isAdministrator: true } })).status).toBe(422)
    const broken = await fetch(`${inject('baseURL')}/api/account/name`, {
      method: 'PUT', body: '{"name":', headers: { 'content-type': 'application/json', 'csrf-token': client.token, 'cookie': [...client.cookies].map(pair => pair.join('=')).join('; ') },
    })
    expect([400, 422]).toContain(broken.status)
  })

  it('with the same Idempotency-Key is done once', async () => {
    const { client } = programme.people.lead
    const email = `once.${deps.ids.next()}@example.org`
    const send = () => client.send(`/api/programmes/${programme.code}/invitations`, { method: 'POST', body: { email, roles: ['chemist'] }, headers: { 'Idempotency-Key': `key-${email.slice(5, 41)}` } })
    const [first, second] = [await send(), await send()]
    expect([first.status, second.status, second.body]).toEqual([200, 200, first.body])
    expect(await deps.db('mail').where({ to_address: email })).toHaveLength(1)
  })
})

describe('every answer', () => {
  it('carries the headers that keep a page to itself', async () => {
    const { headers } = await new ApiClient().send('/sign-in')
    const policy = headers.get('content-security-policy') ?? ''
    expect(policy).toMatch(/default-src 'self'/)
    expect(policy).toMatch(/script-src [^;]*'nonce-/)
    expect(policy).not.toMatch(/script-src [^;]*'unsafe-(inline|eval)'/)
    expect(policy).not.toMatch(/https:|\*/)
    for (const rule of ['frame-ancestors \'none\'', 'object-src \'none\'', 'base-uri \'none\'', 'form-action \'self\'']) expect(policy).toContain(rule)
    expect(policy).not.toContain('upgrade-insecure-requests')
    expect(headers.get('x-content-type-options')).toBe('nosniff')
    expect(headers.get('referrer-policy')).toBe('no-referrer')
    expect(headers.get('strict-transport-security')).toBeNull()
    expect(headers.get('x-powered-by')).toBeNull()
    expect(headers.get('access-control-allow-origin')).toBeNull()
  })

  it('sets cookies that scripts and other sites do not get', async () => {
    const client = await new ApiClient().open()
    const { email } = await makeAccount(deps)
    const answer = await client.signIn(email, PASSWORD)
    const cookie = answer.headers.getSetCookie().find(line => line.startsWith('lanthorn='))
    expect(cookie).toMatch(/HttpOnly/i)
    expect(cookie).toMatch(/SameSite=Lax/i)
    expect(answer.text).not.toContain('sessionId')
  })
})

describe('sign-in over HTTP', () => {
  it('gives a new cookie each time, so that one planted before is worth nothing', async () => {
    const client = await new ApiClient().open()
    await client.send('/api/session')
    const before = client.cookies.get('lanthorn')
    const { email } = await makeAccount(deps)
    await client.signIn(email, PASSWORD)
    expect(client.cookies.get('lanthorn')).not.toBe(before)
    expect((await client.send('/api/session')).body).toMatchObject({ signedIn: { person: { email } } })
  })

  it('pauses after five failures with 429 and the seconds to wait', async () => {
    const client = await new ApiClient().open()
    const { email } = await makeAccount(deps)
    for (let n = 1; n <= ACCOUNT_RULE.free; n++) expect((await client.signIn(email, 'wrong')).status).toBe(401)
    const paused = await client.signIn(email, PASSWORD)
    expect(paused.status).toBe(429)
    expect(paused.body).toMatchObject({ data: { code: 'lockedOut', retryAfter_s: expect.any(Number) as number } })
  })

  it('trusts no forwarded address', async () => {
    const client = await new ApiClient().open()
    const { email } = await makeAccount(deps)
    for (let n = 1; n <= ACCOUNT_RULE.free; n++) await client.send('/api/session', { method: 'POST', body: { email, password: 'wrong' }, headers: { 'x-forwarded-for': `203.0.113.${n}` } })
    const rows = await deps.db('sign_in_attempt').distinct('source') as { source: string }[]
    expect(rows.map(row => row.source).filter(source => source.startsWith('203.0.113.'))).toEqual([])
  })
})

describe('removal', () => {
  it('works at once: the next request of the person removed is refused', async () => {
    const member = await makeMember(deps, programme.id, ['physicist'])
    const people = `/api/programmes/${programme.code}/people`
    expect((await member.client.send(people)).status).toBe(200)
    expect((await programme.people.lead.client.send(`${people}/${member.personId}`, { method: 'DELETE' })).status).toBe(200)
    expect((await member.client.send(people)).status).toBe(401)
    await member.client.signIn(member.email, PASSWORD)
    expect((await member.client.send(people)).status).toBe(404)
  })

  it('of a role works at once as well', async () => {
    const member = await makeMember(deps, programme.id, ['lead'])
    const invitations = `/api/programmes/${programme.code}/invitations`
    expect((await member.client.send(invitations)).status).toBe(200)
    await programme.people.lead.client.send(`/api/programmes/${programme.code}/people/${member.personId}`, { method: 'PUT', body: { roles: ['chemist'] } })
    await member.client.signIn(member.email, PASSWORD)
    expect((await member.client.send(invitations)).status).toBe(403)
  })
})

describe('an invitation over HTTP', () => {
  it('is shown by GET, used up by POST, and gone with 410 afterwards', async () => {
    const email = `guest.${deps.ids.next()}@example.org`
    await programme.people.lead.client.send(`/api/programmes/${programme.code}/invitations`, { method: 'POST', body: { email, roles: ['partner'] } })
    const path = `/api/invitations/${await tokenMailedTo(deps, email)}`
    const guest = await new ApiClient().open()
    for (let n = 0; n < 2; n++) expect((await guest.send(path)).body).toMatchObject({ email, roles: ['partner'], knows: false })
    expect((await guest.send(path, { method: 'POST', body: { as: 'newPerson', name: 'Guest', password: 'short' } })).body).toMatchObject({ data: { field: 'password' } })
    expect((await guest.send(path, { method: 'POST', body: { as: 'newPerson', name: 'Guest', password: PASSWORD } })).body).toEqual({ programmeCode: programme.code })
    expect((await guest.send('/api/session')).body).toMatchObject({ signedIn: { person: { email }, memberships: [{ programmeCode: programme.code, roles: ['partner'] }] } })
    expect((await guest.send(path)).status).toBe(410)
    expect((await guest.send(path, { method: 'POST', body: { as: 'existing', password: PASSWORD } })).status).toBe(410)
  })
})

describe('pages', () => {
  it('lead whoever is not signed in to the door, and there only to places of our own', async () => {
    const answer = await new ApiClient().send(`/${programme.code}/people`)
    expect([answer.status, answer.headers.get('location')]).toEqual([302, `/sign-in?to=/${programme.code}/people`])
  })

  it('of another programme or of the installation look like pages that do not exist', async () => {
    const { client } = programme.people.chemist
    for (const path of ['/no-such-programme/people', '/admin/people']) expect([path, (await client.send(path)).status]).toEqual([path, 404])
  })

  it('stand for a lead and for an administrator', async () => {
    const { client: admin } = await makeClient(deps, { isAdministrator: true })
    for (const page of ['people', 'settings', 'audit']) expect([page, (await programme.people.lead.client.send(`/${programme.code}/${page}`)).status]).toEqual([page, 200])
    for (const page of ['/admin/people', '/admin/programmes', '/admin/audit', '/admin/system', '/admin/mail', '/account']) expect([page, (await admin.send(page)).status]).toEqual([page, 200])
  })
})

describe('too many requests', () => {
  it('of one person are refused with the seconds to wait, and those of others are not', async () => {
    const { client } = await makeClient(deps)
    const most = Number(process.env.LANTHORN_REQUESTS_PER_MINUTE ?? 1200)
    const seen = new Set<number>()
    for (let sent = 0; sent <= most + 20; sent += 40) for (const answer of await Promise.all(Array.from({ length: 40 }, () => client.send('/api/session')))) seen.add(answer.status)
    expect([...seen].sort()).toEqual([200, 429])
    expect((await client.send('/api/session')).body).toMatchObject({ data: { code: 'tooManyRequests', retryAfter_s: expect.any(Number) as number } })
    expect((await programme.people.chemist.client.send('/api/session')).status).toBe(200)
  })
})
