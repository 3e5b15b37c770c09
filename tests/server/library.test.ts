import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { AppError } from '../../shared/errors'
import { recordKind } from '../../shared/evidence/records/index'
import { validateEntry } from '../../shared/evidence/records/validate'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import { choice, exact, plain } from '../../shared/library/define'
import { LIBRARY } from '../../shared/library/index'
import { LibraryCopied, LibraryCopyInput } from '../../shared/schemas/library'
import { LigandPayload } from '../../shared/schemas/ligand'
import { SourceInput } from '../../shared/schemas/source'
import { copyFromLibrary } from '../../server/services/copyFromLibrary'
import { proposeFromSmiles } from '../../server/services/proposeFromSmiles'
import { readAudit } from '../../server/services/readAudit'
import { showAgent } from '../../server/services/showAgent'
import { listRecords, showRecord } from '../../server/services/showRecord'
import { showStability } from '../../server/services/showStability'
import { StabilityDto } from '../../shared/schemas/stability'
import { makeDeps, makeProgramme, type TestDeps, type TestProgramme } from '../support/factory'
import { enter, register, RING, sign } from '../support/registry'

let deps: TestDeps
let programme: TestProgramme
beforeAll(() => { deps = makeDeps() })
afterAll(() => deps.close())
beforeEach(async () => { programme = await makeProgramme(deps) })

const copy = async (body: unknown, key?: string) =>
  LibraryCopied.parse(await copyFromLibrary(deps, { actor: programme.people.chemist, programmeId: programme.id, body: LibraryCopyInput.parse(body), ...(key ? { idempotency: { key, request: body } } : {}) }))
const agent = (agentCode: string, ligandCode = `${agentCode}-L`, metal = 'Gd') => ({ kind: 'newAgent', agentCode, ligandCode, metal, mechanism: 'T1' })
const errorOf = async (act: Promise<unknown>): Promise<AppError> => {
  const outcome = await act.then(() => null, (error: unknown) => error)
  if (!(outcome instanceof AppError)) throw new Error(`no AppError but ${String(outcome)}`)
  return outcome
}
const DOTA = 'tetraazacyclododecane-tetraacetate'

describe('the starter library itself', () => {
  it('draws every ligand and agrees with its structure on charge, ring and donors (the butrol group binds with one of three hydroxyls)', () => {
    expect(LIBRARY.length).toBeGreaterThan(12)
    for (const { key, payload } of LIBRARY) {
      const { deprotonatedCharge, topology, denticity } = proposeFromSmiles(payload.smiles)
      const spare = key === 'butrol-triacetate' ? 2 : 0
      expect([key, LigandPayload.parse(payload).charge, payload.topology, payload.denticity + spare]).toEqual([key, deprotonatedCharge, topology, denticity])
      expect([key, payload.donors.reduce((sum, one) => sum + one.count, 0)]).toEqual([key, payload.denticity])
    }
  })

  it('holds only records that the form would take, each with a source that says how the value is known', () => {
    const keys = LIBRARY.flatMap(one => one.records.map(record => `${one.key} ${record.key}`))
    expect(new Set(keys).size).toBe(keys.length)
    for (const { key, records } of LIBRARY) {
      for (const record of records) {
        expect([key, record.key, validateEntry(recordKind(record.kind)!, record.entry, { metal: record.metal, ligandProtonation: null })]).toEqual([key, record.key, []])
        const { note, origin } = SourceInput.parse(record.source)
        expect([key, record.key, note]).toEqual([key, record.key, expect.stringMatching(origin === 'paper' ? /looked up\./ : /from memory|common practice, no source/)])
      }
    }
  })
})

describe('a copy from the starter library', () => {
  it('makes ligand, agent and records in one go: drafts with the citation as source, marked "from memory", waiting for the same check', async () => {
    const { agent: code, ligand, records } = await copy({ ligand: 'diethylenetriaminepentaacetate', into: agent('GD-D', 'DTPA'), records: ['thermo-Gd', 'rates-Gd', 'acid-Gd', 'zinc-Gd'] })
    expect([code, ligand, records.length]).toEqual(['GD-D', 'DTPA', 4])
    const shown = await showAgent(deps, { programmeId: programme.id, scope: 'programme', code: 'GD-D' })
    expect(shown.agent.payload).toMatchObject({ metal: 'Gd', charge: -2, q: null })
    expect(shown.agent.payload.molarMass_g_per_mol).toBeCloseTo(545.56, 1)
    expect(shown.batches).toEqual([])
    expect(shown.ligand.payload.protonation!.stepwiseLogK.map(one => one.value)).toEqual([10.49, 8.6, 4.28, 2.64, 2])
    const record = await showRecord(deps, { programmeId: programme.id, scope: 'programme', id: records[0]! })
    expect(record).toMatchObject({ checkState: 'draft', versionNo: 1, source: { origin: 'memory', citation: expect.stringContaining('Moeller'), note: expect.stringMatching(/^Literature, from the starter library; from memory, not looked up/) } })
    // Cacheris et al. 1990: pGd 19.1
    expect(record.evidence.find(item => item.quantity === 'pM')!.value.value).toBeCloseTo(19.1, 1)
    expect((await listRecords(deps, { programmeId: programme.id, scope: 'signed' })).records).toEqual([])
    await sign(deps, programme, 'record', records[0]!)
    expect((await listRecords(deps, { programmeId: programme.id, scope: 'signed' })).records).toHaveLength(1)
  })

  it('of the ligand alone registers it for agents of the programme\'s own', async () => {
    expect(await copy({ ligand: 'citrate', into: { kind: 'ligand', ligandCode: 'Cit' }, records: [] })).toEqual({ ligand: 'Cit', agent: null, records: [] })
    expect((await errorOf(copy({ ligand: 'citrate', into: { kind: 'ligand', ligandCode: 'Cit' }, records: [] }))).code).toBe('conflict')
  })

  it('onto an agent of the programme wants its ligand and its metal', async () => {
    await register(deps, programme, { code: 'OWN-1', smiles: RING })
    const { records } = await copy({ ligand: DOTA, into: { kind: 'agent', agentCode: 'OWN-1' }, records: ['thermo-Gd'] })
    expect(records).toHaveLength(1)
    expect((await errorOf(copy({ ligand: 'tetraamide', into: { kind: 'agent', agentCode: 'OWN-1' }, records: ['thermo-Gd'] }))).message).toContain('C16H32N8O4')
    await register(deps, programme, { code: 'EU-1', smiles: RING, metal: 'Eu' })
    expect((await errorOf(copy({ ligand: DOTA, into: { kind: 'agent', agentCode: 'EU-1' }, records: ['thermo-Gd'] }))).details.accepted).toBe('records of Eu')
    expect((await errorOf(copy({ ligand: DOTA, into: { kind: 'agent', agentCode: 'NONE' }, records: [] }))).code).toBe('notFound')
  })

  it('is done once for one key, refused a second time without it, and undone whole where one record does not fit', async () => {
    const body = { ligand: DOTA, into: agent('GD-R'), records: ['acid-Gd'] }
    const first = await copy(body, 'one-key-for-all')
    expect(await copy(body, 'one-key-for-all')).toEqual(first)
    const again = await errorOf(copy({ ligand: DOTA, into: { kind: 'agent', agentCode: 'GD-R' }, records: ['acid-Gd'] }))
    expect([again.code, again.details.data]).toEqual(['conflict', { personName: programme.people.chemist.name, at: deps.clock.now().toISOString() }])
    expect((await errorOf(copy({ ligand: DOTA, into: agent('EU-R', 'EU-R-L', 'Eu'), records: ['acid-Gd'] }))).code).toBe('invalidInput')
    expect((await errorOf(showAgent(deps, { programmeId: programme.id, scope: 'programme', code: 'EU-R' }))).code).toBe('notFound')
    expect((await listRecords(deps, { programmeId: programme.id, scope: 'programme' })).records).toHaveLength(1)
  })

  it('stands in the audit trail', async () => {
    await copy({ ligand: DOTA, into: agent('GD-A'), records: ['acid-Gd'] })
    const { links } = await readAudit(deps, { chainId: programme.id, before: null })
    expect(links.map(one => one.command)).toContain('copyFromLibrary')
  })

  it.each([
    ['a ligand it does not have', { ligand: 'nothing', into: { kind: 'ligand', ligandCode: 'X' }, records: [] }, 'notFound'],
    ['a record it does not have', { ligand: DOTA, into: agent('GD-X'), records: ['thermo-Xx'] }, 'notFound'],
    ['records without an agent', { ligand: DOTA, into: { kind: 'ligand', ligandCode: 'X' }, records: ['thermo-Gd'] }, 'invalidInput'],
  ])('is refused for %s', async (_, body, code) => {
    expect((await errorOf(copy(body))).code).toBe(code)
  })
})

describe('what the trade says of a tetraamide and its tetraacetate', () => {
  it('comes out of the tool: above in the acid table, below on log K, and said in words [common practice, no source: 250 h against 50 h, log K 12 against 26]', async () => {
    await copy({ ligand: 'tetraamide', into: agent('AMIDE'), records: ['practice-logK', 'practice-acid'] })
    await copy({ ligand: DOTA, into: agent('ACETATE'), records: ['practice-logK', 'practice-acid'] })
    const { inAcid, agents } = StabilityDto.parse(await showStability(deps, { programmeId: programme.id, scope: 'programme' }))
    expect(inAcid).toHaveLength(1)
    expect(inAcid[0]).toMatchObject({ condition: 'strong acid, not stated which', rows: [{ code: 'AMIDE', logK: { value: { value: 12 } } }, { code: 'ACETATE', logK: { value: { value: 26 } } }] })
    expect(inAcid[0]!.remarks).toEqual([expect.stringMatching(/^AMIDE holds its metal less strongly at equilibrium than ACETATE \(log K 12\.0 against 26\.0\) and lets go 5\.0 times more slowly in this acid/)])
    const logK = Object.fromEntries(agents.map(one => [one.code, one.logK!.value.value]))
    expect(logK.AMIDE).toBeLessThan(logK.ACETATE!)
  })

  it('comes out of values typed with their acid and temperature too, and never from two acids', async () => {
    const typed = (hours: number, acid_M: number): RecordEntry => ({ halfLife: exact(hours, 'h'), acid: choice('HCl'), acid_M: plain(acid_M, 'M'), temperature_K: plain(25, '°C') })
    for (const [code, hours, logK, acid_M] of [['AMIDE', 250, 12, 1], ['ACETATE', 50, 26, 1], ['ELSEWHERE', 20, 26, 0.1]] as const) {
      await register(deps, programme, { code })
      await enter(deps, programme, { agent: code, kind: 'acidHalfLife', entry: typed(hours, acid_M) })
      await enter(deps, programme, { agent: code, kind: 'thermo', entry: { logK: exact(logK), method: choice('practice') } })
    }
    const { inAcid } = await showStability(deps, { programmeId: programme.id, scope: 'programme' })
    expect(inAcid.map(table => table.rows.map(row => row.code))).toEqual([['AMIDE', 'ACETATE'], ['ELSEWHERE']])
    expect(inAcid.map(table => table.remarks.length)).toEqual([1, 0])
  })
})
