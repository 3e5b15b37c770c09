import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { AppError } from '../../shared/errors'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import { correctRecord } from '../../server/services/correctRecord'
import { enterRecord } from '../../server/services/enterRecord'
import { returnEvidence } from '../../server/services/returnEvidence'
import { listRecords, listSources, showRecord } from '../../server/services/showRecord'
import { signEvidence } from '../../server/services/signEvidence'
import { showAgent } from '../../server/services/showAgent'
import { submitForCheck } from '../../server/services/submitForCheck'
import { sealed } from '../../server/platform/hashes'
import { toBinary } from '../../server/platform/ids'
import { complexProtonationIn } from '../../shared/evidence/records/thermoLists'
import { readEvidence } from '../../server/queries/evidence'
import { makeDeps, makeProgramme, type TestDeps, type TestProgramme } from '../support/factory'
import { PUBLISHED, rateLawEntry, thermoEntry } from '../support/publishedRecords'
import { CHAIN, enter, register, sign, SOURCE } from '../support/registry'

let deps: TestDeps
let programme: TestProgramme
let complexId: string
beforeAll(() => { deps = makeDeps() })
afterAll(() => deps.close())
beforeEach(async () => {
  programme = await makeProgramme(deps)
  complexId = (await register(deps, programme, { code: 'GD-1', smiles: CHAIN, topology: 'openChain' })).complexId
})

const show = (id: string, scope: 'programme' | 'signed' = 'programme', at = programme) => showRecord(deps, { programmeId: at.id, scope, id })
const stepInput = (id: string, expectedSeq: number, comment = '') => ({ actor: programme.people.chemist, programmeId: programme.id, kind: 'record' as const, id, expectedSeq, comment })
const correct = (id: string, basedOn: number, entry: RecordEntry, reason = 'a digit was transposed') =>
  correctRecord(deps, { actor: programme.people.chemist, programmeId: programme.id, recordId: id, body: { basedOn, entry, source: SOURCE, lot: null, reason } })
const errorOf = async (act: Promise<unknown>): Promise<AppError> => {
  const outcome = await act.then(() => null, (error: unknown) => error)
  if (!(outcome instanceof AppError)) throw new Error(`no AppError but ${String(outcome)}`)
  return outcome
}

describe('published constants typed as records', () => {
  it.each([['dtpa', 19.1], ['dtpaBma', 15.8]] as const)('%s: pGd %f is read back from the evidence [Cacheris et al., Magn. Reson. Imaging 8, 467 (1990)]', async (name, pGd) => {
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'thermo', entry: thermoEntry(PUBLISHED[name]) })
    await sign(deps, programme, 'record', id)
    const evidence = await readEvidence(deps.db, programme.id, 'signed', { complexId })
    const pM = evidence.find(item => item.quantity === 'pM')!
    expect(pM.value.value).toBeCloseTo(pGd, 1)
    expect(pM).toMatchObject({ signed: true, conditions: { pH: 7.4, metal: 'Gd', metal_M: 1e-6, ligand_M: 1e-5 }, origin: { kind: 'record', id } })
  })

  it('keep what was typed, the conditions in stored units, the source and who typed it', async () => {
    const body = { kind: 'thermo', agent: 'GD-1', lot: 'L1', entry: thermoEntry(PUBLISHED.dtpa), source: { citation: PUBLISHED.dtpa.citation, doi: null, origin: 'memory' as const, note: null } }
    const { id } = await enterRecord(deps, { actor: programme.people.chemist, programmeId: programme.id, body })
    const shown = await show(id)
    expect(shown).toMatchObject({ kind: 'thermo', agent: 'GD-1', lot: 'L1', metal: 'Gd', versionNo: 1, reason: null, by: programme.people.chemist.name, checkState: 'draft', entry: body.entry })
    expect(shown.source).toMatchObject({ citation: PUBLISHED.dtpa.citation, origin: 'memory' })
    expect(shown.conditions).toContain('25 °C'.replace(' ', '\u00A0'))
    expect(shown.summary).toContain('22.46 ± 0.10')
    expect(shown.evidence.map(item => item.quantity).sort()).toEqual(['logK', 'logKCa', 'logKConditional', 'logKCu', 'logKZn', 'pM'])
    expect(shown.evidence[0]!.conditions.temperature_K).toBe(298.15)
  })

  it('are offered again as sources, each once', async () => {
    await enter(deps, programme, { agent: 'GD-1', kind: 'thermo', entry: thermoEntry(PUBLISHED.dtpa) })
    await enter(deps, programme, { agent: 'GD-1', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 0.58 } }) })
    expect((await listSources(deps, { programmeId: programme.id })).sources).toEqual([expect.objectContaining({ citation: SOURCE.citation, origin: 'own' })])
  })
})

describe('two records of one agent', () => {
  it('with constants of zinc at I = 0 and at 0.1 M are not held against each other, on the agent\'s own page [NIST SRD 46: 18.0 and 16.5 for EDTA]', async () => {
    const zinc = (value: number, strength_M: number) => thermoEntry({ ...PUBLISHED.dtpa, competitors: { Zn: value } }, { ionicStrength_M: { type: 'number', value: strength_M, unit: 'M' } })
    await enter(deps, programme, { agent: 'GD-1', kind: 'thermo', entry: zinc(18, 0) })
    const shown = async () => (await showAgent(deps, { programmeId: programme.id, scope: 'programme', code: 'GD-1' })).constantsDiffer
    expect(await shown()).toEqual([])
    await enter(deps, programme, { agent: 'GD-1', kind: 'thermo', entry: zinc(16.5, 0.1) })
    expect(await shown()).toEqual([expect.stringMatching(/is for I = 0 M, .* for 0.1 M\. Accepted: Constants at one ionic strength/)])
  })

  it('of version 1 of their kind still read as they were typed', async () => {
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'thermo', entry: thermoEntry(PUBLISHED.dtpa) })
    // an entry as version 1 kept it: the protonated complex without a form, which meant stepwise
    const old = { kindVersion: 1, metal: 'Gd', entry: thermoEntry(PUBLISHED.dtpa, { complexProtonation: { type: 'steps', steps: [{ value: 2.39, se: null }] } }), reason: null }
    const newId = deps.ids.next()
    const [row] = await deps.db('record').where('id', toBinary(id))
    await deps.db('record').insert({ id: toBinary(newId), programme_id: row.programme_id, root_id: toBinary(newId), version_no: 1, kind: 'thermo', complex_id: row.complex_id, payload: sealed(old).text, payload_hash: sealed(old).hash, conditions: row.conditions, source_id: row.source_id, created_by: row.created_by, created_at: row.created_at })
    expect(await show(newId)).toMatchObject({ summary: expect.stringContaining('22.46'), entry: old.entry })
    expect(complexProtonationIn(old.entry, 22.46)).toEqual([2.39])
  })
})

describe('refusals of a record', () => {
  it('name every field at fault with what is accepted, and store nothing', async () => {
    const entry = { ...rateLawEntry({ k1_per_M_s: { value: -1 } }), temperature_K: { type: 'number' as const, value: 25, unit: 'K' } }
    const error = await errorOf(enter(deps, programme, { agent: 'GD-1', kind: 'rateLaw', entry }))
    expect(error.code).toBe('invalidInput')
    const issues = (error.details.data as { issues: { field: string, accepted: string }[] }).issues
    expect(issues.map(one => one.field)).toEqual(['entry.k1_per_M_s', 'entry.temperature_K'])
    expect(issues.every(one => one.accepted.length > 3)).toBe(true)
    expect((await listRecords(deps, { programmeId: programme.id, scope: 'programme' })).records).toEqual([])
  })

  it('of an unknown agent, lot or kind say so', async () => {
    const entry = rateLawEntry({ k1_per_M_s: { value: 1 } })
    expect((await errorOf(enter(deps, programme, { agent: 'GD-9', kind: 'rateLaw', entry }))).code).toBe('notFound')
    expect((await errorOf(enter(deps, programme, { agent: 'GD-1', kind: 'toString', entry }))).details.field).toBe('kind')
    const lot = enterRecord(deps, { actor: programme.people.chemist, programmeId: programme.id, body: { kind: 'rateLaw', agent: 'GD-1', lot: 'L9', entry, source: SOURCE } })
    expect((await errorOf(lot)).code).toBe('notFound')
  })
})

describe('versions of a record', () => {
  const typed = (k1: number) => rateLawEntry({ k1_per_M_s: { value: k1, se: 0.05 } })

  it('answer a return: the new one is a draft, the old one stays returned with the words that came with it', async () => {
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'rateLaw', entry: typed(5.8) })
    await submitForCheck(deps, stepInput(id, 0))
    await returnEvidence(deps, { ...stepInput(id, 1, 'k1 looks ten times too large'), actor: programme.people.physicist })
    expect((await show(id)).returnComment).toMatchObject({ comment: 'k1 looks ten times too large', by: programme.people.physicist.name })
    const second = await correct(id, 1, typed(0.58))
    const shown = await show(second.id)
    expect(shown).toMatchObject({ versionNo: 2, checkState: 'draft', reason: 'a digit was transposed', rootId: id, returnComment: null })
    expect(shown.versions.map(one => [one.versionNo, one.checkState])).toEqual([[2, 'draft'], [1, 'returned']])
  })

  it('count only when signed: the signed first version stands until the second is signed', async () => {
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'rateLaw', entry: typed(5.8) })
    await sign(deps, programme, 'record', id)
    const second = await correct(id, 1, typed(0.58))
    const current = async () => (await listRecords(deps, { programmeId: programme.id, scope: 'signed' })).records.map(one => one.versionNo)
    expect(await current()).toEqual([1])
    await sign(deps, programme, 'record', second.id)
    expect(await current()).toEqual([2])
  })

  it('made by two people at once: one conflict that names who and when, no third row', async () => {
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'rateLaw', entry: typed(5.8) })
    const outcomes = await Promise.allSettled([correct(id, 1, typed(1)), correct(id, 1, typed(2))])
    expect(outcomes.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    const refused = outcomes.find(one => one.status === 'rejected')!.reason as AppError
    expect([refused.code, refused.details.data]).toEqual(['conflict', { personName: programme.people.chemist.name, at: deps.clock.now().toISOString() }])
    expect((await show(id)).versions).toHaveLength(2)
  })

  it('do not let the person who typed any version sign', async () => {
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'rateLaw', entry: typed(5.8) })
    await submitForCheck(deps, stepInput(id, 0))
    expect((await errorOf(signEvidence(deps, { ...stepInput(id, 1), actor: programme.people.chemist }))).code).toBe('notAllowed')
  })
})

describe('who sees a record', () => {
  it('nobody of another programme, in the words of a missing one', async () => {
    const other = await makeProgramme(deps)
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'thermo', entry: thermoEntry(PUBLISHED.dtpa) })
    const [stranger, missing] = await Promise.all([errorOf(show(id, 'programme', other)), errorOf(show(deps.ids.next(), 'programme', other))])
    expect([stranger.code, stranger.message]).toEqual([missing.code, missing.message])
    const theft = correctRecord(deps, { actor: other.people.chemist, programmeId: other.id, recordId: id, body: { basedOn: 1, entry: {}, source: SOURCE, lot: null, reason: 'not theirs to change' } })
    expect((await errorOf(theft)).code).toBe('notFound')
  })

  it('partners only when signed, without the words of a return and without newer drafts', async () => {
    const { id } = await enter(deps, programme, { agent: 'GD-1', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 1 } }) })
    expect((await errorOf(show(id, 'signed'))).code).toBe('notFound')
    await sign(deps, programme, 'record', id)
    await correct(id, 1, rateLawEntry({ k1_per_M_s: { value: 2 } }))
    const seen = await show(id, 'signed')
    expect([seen.newestVersionNo, seen.versions.length, seen.returnComment]).toEqual([1, 1, null])
  })
})
