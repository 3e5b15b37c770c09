import { createHash } from 'node:crypto'
import { afterAll, describe, expect, it } from 'vitest'
import { toBinary } from '../../server/platform/ids'
import { readEvidence } from '../../server/queries/evidence'
import { correctConditions } from '../../server/services/correctConditions'
import { showFit } from '../../server/services/showFit'
import { traceNumber } from '../../server/services/traceNumber'
import type { Scope } from '../../shared/permissions'
import type { TraceDto } from '../../shared/schemas/trace'
import { refusal } from '../support/actors'
import { fittedSeries, stepsOf } from '../support/checks'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { rateLawEntry } from '../support/publishedRecords'
import { enter, register } from '../support/registry'
import { toyKind } from '../support/toyKind'
import { bytesOf, glowTable } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())
const trace = (programme: TestProgramme, evidenceId: string, scope: Scope = 'programme') => traceNumber(deps, { programmeId: programme.id, scope, evidenceId })
const idOf = async (programme: TestProgramme, quantity: string): Promise<string> => (await readEvidence(deps.db, programme.id, 'programme')).find(item => item.quantity === quantity)!.id
const step = (dto: TraceDto, id: TraceDto['steps'][number]['id']) => dto.steps.find(one => one.id === id)!

describe('where a fitted number comes from [product: any number answers]', () => {
  it('goes down to the hash of the very bytes that were uploaded, by way of check, series and tubes', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await way.sign(way.fitId)
    const found = await trace(way.programme, await idOf(way.programme, 'glow_per_mM'))
    expect(found.steps.map(one => one.id)).toEqual(['fit', 'check', 'series', 'tubes', 'file', 'engine'])
    expect(found).toMatchObject({ quantity: 'glow_per_mM', agentCode: 'TS-01', repeat: { seriesId: way.seriesId, versionNo: 1 } })
    expect(step(found, 'file')).toMatchObject({ title: 'table.csv', sha256: createHash('sha256').update(bytesOf(glowTable({ agent: 'TS-01' }))).digest('hex') })
    expect(step(found, 'check')).toMatchObject({ lit: true, lines: [`${way.physicist.name}, 2026-03-02 09:00 UTC`] })
    expect(step(found, 'tubes').title).toBe('4 tubes, 12 points')
    const fit = await showFit(deps, { programmeId: way.programme.id, scope: 'programme', seriesId: way.seriesId, versionNo: 1 })
    expect(step(found, 'fit')).toMatchObject({ sha256: fit.resultHash, href: `/${way.programme.code}/series/${way.seriesId}?v=1`, lit: true })
    expect(step(found, 'series').sha256).toBe(fit.inputHash)
    expect(found.value.value).toBe(fit.series!.headline.value)
  })

  it('says of an unsigned one where its check stands, and lights nothing', async () => {
    const way = await fittedSeries(deps)
    const found = await trace(way.programme, await idOf(way.programme, 'glow_per_mM'))
    expect(step(found, 'check')).toMatchObject({ title: 'Not signed', lines: ['The check stands at: draft.'] })
    expect(found.steps.some(one => one.lit)).toBe(false)
  })

  it('is still answered for a number whose conditions were corrected since, and says so: a decision may rest on it', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await way.sign(way.fitId)
    const id = await idOf(way.programme, 'glow_per_mM')
    await correctConditions(deps, { actor: way.chemist, programmeId: way.programme.id, seriesId: way.seriesId, request: { conditions: { temperature_K: 298.15 }, tubes: [], reason: 'The room was not heated.' } })
    expect(step(await trace(way.programme, id), 'series').lines).toContain('its conditions were corrected since: its numbers count no longer')
    expect((await refusal(trace(way.programme, id, 'signed'))).code).toBe('notFound')
  })
})

describe('where a typed number comes from', () => {
  it('of a record: its version, who typed it, its source', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: 'TS-01' })
    const { id } = await enter(deps, programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 0.58, se: 0.02 } }) })
    const [item] = await readEvidence(deps.db, programme.id, 'programme')
    const found = await trace(programme, item!.id)
    expect(found.steps.map(one => one.id)).toEqual(['record', 'check', 'source'])
    expect(step(found, 'record')).toMatchObject({ href: `/${programme.code}/records/${id}`, lines: [`entered by ${programme.people.chemist.name}, 2026-03-02 09:00 UTC`] })
    expect(step(found, 'record').sha256).toMatch(/^[0-9a-f]{64}$/)
    expect(step(found, 'source').lines).toEqual(['A test source, 2026'])
    expect(found.repeat).toBeNull()
  })

  it('of a batch: the lot and its version, with the agent\'s page', async () => {
    const programme = await makeProgramme(deps)
    const { batchVersionId } = await register(deps, programme, { code: 'TS-02', freeMetal: { kind: '<', value_frac: 0.0005, se_frac: null, method: 'xylenol orange', detectionLimit_frac: 0.0005 } })
    await stepsOf(deps, programme, 'batchVersion').submit(batchVersionId)
    await stepsOf(deps, programme, 'batchVersion').sign(batchVersionId)
    const found = await trace(programme, await idOf(programme, 'freeMetal_frac'))
    expect(found.steps.map(one => one.id)).toEqual(['batch', 'check'])
    expect(step(found, 'batch')).toMatchObject({ title: 'Batch L1, version 1', href: `/${programme.code}/agents/TS-02`, lit: true })
    expect(found.value.kind).toBe('<')
  })
})

describe('who is answered', () => {
  it('a partner: signed numbers only, with the file\'s hash but not its name, nor a way to the check or the bytes', async () => {
    const way = await fittedSeries(deps)
    const id = await idOf(way.programme, 'glow_per_mM')
    const unsigned = await refusal(trace(way.programme, id, 'signed'))
    expect(unsigned).toEqual(await refusal(trace(way.programme, deps.ids.next(), 'signed')))
    await way.submit(way.fitId)
    await way.sign(way.fitId)
    const found = await trace(way.programme, id, 'signed')
    expect(JSON.stringify(found)).not.toContain('table.csv')
    expect(JSON.stringify(found)).not.toMatch(/\/checks\/|\/uploads\//)
    expect(step(found, 'file')).toMatchObject({ title: 'Raw file', href: null, sha256: expect.stringMatching(/^[0-9a-f]{64}$/) })
    expect(found.repeat).toBeNull()
    await deps.db('programme').where({ id: toBinary(way.programme.id) }).update({ partner_sees_raw_files: true })
    expect(step(await trace(way.programme, id, 'signed'), 'file').title).toBe('table.csv')
  })

  it('somebody of another programme in the words of a number that does not exist', async () => {
    const way = await fittedSeries(deps)
    const other = await makeProgramme(deps)
    expect(await refusal(trace(other, await idOf(way.programme, 'glow_per_mM')))).toEqual(await refusal(trace(other, deps.ids.next())))
  })
})
