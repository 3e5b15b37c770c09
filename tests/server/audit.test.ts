import { afterAll, describe, expect, it } from 'vitest'
import { toBinary } from '../../server/platform/ids'
import { sealed } from '../../server/platform/hashes'
import { readAudit, auditVerdict } from '../../server/services/readAudit'
import { linkHash, unitOfWork } from '../../server/services/unitOfWork'
import { verifyAudit } from '../../server/services/verifyAudit'
import { readChain } from '../../server/queries/audit'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { openAsOwner } from '../support/ownerDatabase'

const deps = makeDeps()
const owner = openAsOwner()
afterAll(async () => {
  await deps.close()
  await owner.destroy()
})

/** A programme whose chain has that many links. */
async function chain(links: number): Promise<TestProgramme> {
  const programme = await makeProgramme(deps)
  for (let n = 1; n <= links; n++) {
    await unitOfWork(deps, { actor: programme.people.chemist, name: `command${n}`, programmeId: programme.id }, async () => ({ result: n, subject: `thing ${n}`, payload: { n, name: 'é—µ' } }))
  }
  return programme
}
const link = (programme: TestProgramme, seq: number) => owner('audit').where({ chain_id: toBinary(programme.id), seq })

describe('the audit chain', () => {
  it('holds from its first link to its head when nobody touched it', async () => {
    const programme = await chain(4)
    expect(await verifyAudit(deps, programme.id)).toEqual({ whole: true, links: 4 })
    const links = await readChain(deps.db, programme.id, 0, 10)
    expect(links.map(one => [one.seq, one.command, one.personId])).toEqual([1, 2, 3, 4].map(n => [n, `command${n}`, programme.people.chemist.personId]))
  })

  it('is whole where nothing happened yet', async () => {
    expect(await verifyAudit(deps, (await makeProgramme(deps)).id)).toEqual({ whole: true, links: 0 })
  })

  it('walks chains longer than a page of the walk', async () => {
    const programme = await makeProgramme(deps)
    await owner.transaction(async (trx) => {
      let previousHash: Buffer = Buffer.alloc(32)
      for (let seq = 1; seq <= 1203; seq++) {
        const one = { chainId: programme.id, seq, at: deps.clock.now(), personId: null, command: 'many', subject: 's', payload: sealed({ seq }).text, previousHash }
        const hash = linkHash(one)
        await trx('audit').insert({ id: toBinary(deps.ids.next()), chain_id: toBinary(programme.id), seq, at: one.at, person_id: null, command: one.command, subject: one.subject, payload: one.payload, previous_hash: previousHash, hash })
        previousHash = hash
      }
      await trx('audit_head').insert({ chain_id: toBinary(programme.id), seq: 1203, hash: previousHash })
    })
    expect(await verifyAudit(deps, programme.id)).toEqual({ whole: true, links: 1203 })
    await link(programme, 777).update({ subject: 'another' })
    expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: false, brokenAt: 777 })
  })
})

describe('tampering by the owner of the database is found, at its place', () => {
  const changes: Record<string, Record<string, unknown>> = {
    'a changed payload': { payload: '{"n":99}' }, 'another command': { command: 'innocent' }, 'another subject': { subject: 'thing 99' },
    'another person': { person_id: null }, 'another time': { at: new Date('2020-01-01T00:00:00Z') }, 'another hash': { hash: Buffer.alloc(32, 7) },
  }
  for (const [title, change] of Object.entries(changes)) {
    it(`${title} in link 2 of 4`, async () => {
      const programme = await chain(4)
      await link(programme, 2).update(change)
      expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: false, links: 1, brokenAt: 2 })
    })
  }

  it('a link rewritten with a fitting hash breaks the one after it', async () => {
    const programme = await chain(4)
    const [second] = await readChain(deps.db, programme.id, 1, 1)
    const payload = sealed({ n: 'forged' }).text
    await link(programme, 2).update({ payload, hash: linkHash({ ...second!, payload }) })
    expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: false, links: 2, brokenAt: 3 })
  })

  it('a last link rewritten with a fitting hash no longer agrees with the head', async () => {
    const programme = await chain(3)
    const [last] = await readChain(deps.db, programme.id, 2, 1)
    const payload = sealed({ n: 'forged' }).text
    await link(programme, 3).update({ payload, hash: linkHash({ ...last!, payload }) })
    expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: false, brokenAt: 3 })
  })

  it('a link taken out of the middle', async () => {
    const programme = await chain(4)
    await link(programme, 3).delete()
    expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: false, links: 2, brokenAt: 3 })
  })

  it('the newest links cut off', async () => {
    const programme = await chain(4)
    await owner('audit').where({ chain_id: toBinary(programme.id) }).where('seq', '>', 2).delete()
    expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: false, links: 2, brokenAt: 3 })
  })

  it('is said with its place in the verdict that the page shows', async () => {
    const programme = await chain(2)
    expect(await auditVerdict(deps, { chainId: programme.id })).toEqual({ whole: true, links: 2, brokenAt: null, why: null })
    await link(programme, 1).update({ subject: 'other' })
    expect(await auditVerdict(deps, { chainId: programme.id })).toEqual({ whole: false, links: 0, brokenAt: 1, why: 'its content does not match its hash' })
  })
})

describe('the trail as read', () => {
  it('shows newest first, page by page, with names, and one programme\'s chain only', async () => {
    const programme = await chain(3)
    await chain(2)
    const page = await readAudit(deps, { chainId: programme.id, before: null })
    expect(page.links.map(one => [one.seq, one.subject, one.personName])).toEqual([3, 2, 1].map(n => [n, `thing ${n}`, programme.people.chemist.name]))
    expect(page.more).toBe(false)
    expect((await readAudit(deps, { chainId: programme.id, before: 3 })).links.map(one => one.seq)).toEqual([2, 1])
  })
})
