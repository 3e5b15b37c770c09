import { afterAll, describe, expect, it } from 'vitest'
import type { Actor } from '../../shared/permissions'
import { toBinary } from '../../server/platform/ids'
import { unitOfWork, type Command, type Work } from '../../server/services/unitOfWork'
import { verifyAudit } from '../../server/services/verifyAudit'
import { refusal } from '../support/actors'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { failEachQuery, withFault } from '../support/faults'

const deps = makeDeps()
afterAll(() => deps.close())

const command = (programme: TestProgramme, more: Partial<Command> = {}): Command => ({ actor: programme.people.chemist, name: 'testCommand', programmeId: programme.id, ...more })

/** A command that writes a domain row, a job and a mail. */
async function writeThree({ trx, enqueue, sendMail, id, now }: Work, programme: TestProgramme, mark: string) {
  await trx('source').insert({ id: toBinary(id()), programme_id: toBinary(programme.id), citation: mark, origin: 'own', created_by: toBinary(programme.people.chemist.personId), created_at: now })
  await enqueue({ kind: 'test', dedupeKey: `test:${mark}`, payload: { mark }, maxAttempts: 3 })
  await sendMail({ to: 'someone@example.org', subject: mark, body: 'x', template: 'test', dedupeKey: `mail:${mark}` })
  return { result: { mark }, subject: 'test', payload: { mark } }
}

async function stored(programme: TestProgramme) {
  const own = { programme_id: toBinary(programme.id) }
  const count = async (table: string, where: Record<string, unknown>) => Number((await deps.db(table).where(where).count({ n: '*' }).first() as { n: number }).n)
  return {
    source: await count('source', own), job: await count('job', own), mail: await count('mail', own), audit: await count('audit', { chain_id: own.programme_id }),
    idempotency: await count('idempotency', { person_id: toBinary(programme.people.chemist.personId) }),
  }
}

describe('a unit of work', () => {
  it('stores domain row, job, mail with its job, and one link of the chain together [architecture: layers]', async () => {
    const programme = await makeProgramme(deps)
    await unitOfWork(deps, command(programme, { idempotency: { key: deps.ids.next(), request: 1 } }), work => writeThree(work, programme, deps.ids.next()))
    expect(await stored(programme)).toEqual({ source: 1, job: 2, mail: 1, audit: 1, idempotency: 1 })
  })

  it('stores nothing when its function throws at the end', async () => {
    const programme = await makeProgramme(deps)
    await expect(unitOfWork(deps, command(programme), async (work) => {
      await writeThree(work, programme, deps.ids.next())
      throw new Error('changed its mind')
    })).rejects.toThrow('changed its mind')
    expect(await stored(programme)).toEqual({ source: 0, job: 0, mail: 0, audit: 0, idempotency: 0 })
  })

  it('stores nothing when query 1, 2, 3 … fails, whichever it is, and all when none does [fault loop]', async () => {
    const programme = await makeProgramme(deps)
    const mark = deps.ids.next()
    const { failed } = await failEachQuery({
      deps, stored: () => stored(programme),
      attempt: () => unitOfWork(deps, command(programme, { idempotency: { key: deps.ids.next(), request: mark } }), work => writeThree(work, programme, mark)),
    })
    expect(failed).toBeGreaterThanOrEqual(9)
    expect(await stored(programme)).toEqual({ source: 1, job: 2, mail: 1, audit: 1, idempotency: 1 })
    expect(await verifyAudit(deps, programme.id)).toEqual({ whole: true, links: 1 })
  })

  it('is tried again after a deadlock, and done once', async () => {
    const programme = await makeProgramme(deps)
    const lock = (id: string) => (trx: Work['trx']) => trx('programme').where({ id: toBinary(id) }).forUpdate().first('id')
    const other = await makeProgramme(deps)
    let runs = 0
    const crossing = (first: string, second: string) => unitOfWork(deps, command(programme), async ({ trx }) => {
      runs++
      await lock(first)(trx)
      await new Promise(resolve => setTimeout(resolve, 100))
      await lock(second)(trx)
      return { result: 'done', subject: 'test', payload: {} }
    })
    expect(await Promise.all([crossing(programme.id, other.id), crossing(other.id, programme.id)])).toEqual(['done', 'done'])
    expect(runs).toBeGreaterThan(2)
    expect((await stored(programme)).audit).toBe(2)
  })

  it('chains thirty commands at once without a gap', async () => {
    const programme = await makeProgramme(deps)
    await Promise.all(Array.from({ length: 30 }, (_, n) => unitOfWork(deps, command(programme), async () => ({ result: n, subject: 'test', payload: { n } }))))
    expect(await verifyAudit(deps, programme.id)).toEqual({ whole: true, links: 30 })
  })
})

describe('an idempotency key', () => {
  const withKey = (programme: TestProgramme, actor: Actor, key: string, request: unknown, name = 'testCommand') =>
    unitOfWork(deps, command(programme, { actor, name, idempotency: { key, request } }), work => writeThree(work, programme, deps.ids.next()))

  it('answers the same request as before and does nothing again', async () => {
    const programme = await makeProgramme(deps)
    const key = deps.ids.next()
    const first = await withKey(programme, programme.people.chemist, key, { a: 1 })
    expect(await withKey(programme, programme.people.chemist, key, { a: 1 })).toEqual(first)
    expect(await stored(programme)).toMatchObject({ source: 1, audit: 1 })
  })

  it('refuses another request, or another command, under the same key', async () => {
    const programme = await makeProgramme(deps)
    const key = deps.ids.next()
    await withKey(programme, programme.people.chemist, key, { a: 1 })
    expect(await refusal(withKey(programme, programme.people.chemist, key, { a: 2 }))).toMatchObject({ code: 'conflict' })
    expect(await refusal(withKey(programme, programme.people.chemist, key, { a: 1 }, 'otherCommand'))).toMatchObject({ code: 'conflict' })
    expect(await stored(programme)).toMatchObject({ source: 1, audit: 1 })
  })

  it('belongs to one person: the same key of another is another', async () => {
    const programme = await makeProgramme(deps)
    const key = deps.ids.next()
    await withKey(programme, programme.people.chemist, key, { a: 1 })
    await withKey(programme, programme.people.physicist, key, { a: 1 })
    expect(await stored(programme)).toMatchObject({ source: 2, audit: 2 })
  })

  it('is done once by four who send it at the same moment, and all get the same answer', async () => {
    const programme = await makeProgramme(deps)
    const key = deps.ids.next()
    const answers = await Promise.all(Array.from({ length: 4 }, () => withKey(programme, programme.people.chemist, key, { a: 1 })))
    expect(new Set(answers.map(one => one.mark)).size).toBe(1)
    expect(await stored(programme)).toMatchObject({ source: 1, audit: 1 })
  })

  it('is not remembered by a command that failed, which may be sent again under it', async () => {
    const programme = await makeProgramme(deps)
    const key = deps.ids.next()
    const { outcome } = await withFault(deps.db, 4, () => withKey(programme, programme.people.chemist, key, { a: 1 }))
    expect(outcome.status).toBe('rejected')
    await expect(withKey(programme, programme.people.chemist, key, { a: 1 })).resolves.toHaveProperty('mark')
    expect(await stored(programme)).toMatchObject({ source: 1, audit: 1 })
  })
})

describe('the outbox', () => {
  it('holds one mail and one job for one dedupe key, however often it is written', async () => {
    const programme = await makeProgramme(deps)
    const mark = deps.ids.next()
    for (let n = 0; n < 3; n++) {
      await unitOfWork(deps, command(programme), async ({ sendMail }) => {
        await sendMail({ to: 'someone@example.org', subject: 'x', body: 'x', template: 'test', dedupeKey: `mail:${mark}` })
        return { result: n, subject: 'test', payload: {} }
      })
    }
    expect(await stored(programme)).toMatchObject({ mail: 1, job: 1 })
  })
})
