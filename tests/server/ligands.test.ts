import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import type { Scope } from '../../shared/permissions'
import { ligandCsv } from '../../shared/files/ligandCsv'
import { LigandChoiceDto, LigandChoiceQuery } from '../../shared/schemas/ligandChoice'
import { estimateLogK } from '../../shared/science/ligands/estimate'
import { chooseLigand } from '../../server/services/chooseLigand'
import { copyFromLibrary } from '../../server/services/copyFromLibrary'
import { LibraryCopyInput } from '../../shared/schemas/library'
import { makeDeps, makeProgramme, type TestDeps, type TestProgramme } from '../support/factory'
import { thermoEntry } from '../support/publishedRecords'
import { CHAIN, enter, register, RING, sign } from '../support/registry'

let deps: TestDeps
let programme: TestProgramme
beforeAll(() => { deps = makeDeps() })
afterAll(() => deps.close())
beforeEach(async () => { programme = await makeProgramme(deps) })

const choose = async (query: Record<string, unknown> = {}, scope: Scope = 'programme', of = programme) => LigandChoiceDto.parse(await chooseLigand(deps, { programmeId: of.id, scope, query: LigandChoiceQuery.parse(query) }))
const rowOf = (answer: LigandChoiceDto, code: string) => answer.ligands.find(one => one.code === code)!
const hint = (answer: LigandChoiceDto, code: string, about: string) => rowOf(answer, code).hints.find(one => one.about === about)!
const choice = (word: string): RecordEntry[string] => ({ type: 'choice', choice: word })
const constants = (logK: number, protonation: number[]) => ({ name: 'a test complex', logK, protonation, competitors: {}, medium: 'KCl', citation: 'a test', origin: 'paper' as const })
const hours = (value: number): RecordEntry => ({ halfLife: { type: 'quantity', kind: '=', value, se: null, unit: 'h' }, acid: choice('HCl'), acid_M: { type: 'number', value: 1, unit: 'M' }, temperature_K: { type: 'number', value: 25, unit: '°C' } })
const protonation = (steps: number[], medium = 'KCl') => ({ stepwiseLogK: steps.map(value => ({ value, se: null })), temperature_K: 298.15, ionicStrength_M: 0.1, medium, source: 'a test source' })

/** An agent of a ligand of its own with a typed log K, signed unless said otherwise. */
async function measured(code: string, logK: number, steps: number[], { changes = {}, signed = true, smiles = RING }: { changes?: RecordEntry, signed?: boolean, smiles?: string } = {}) {
  await register(deps, programme, { code, smiles, topology: smiles === RING ? 'ring' : 'openChain' })
  const { id } = await enter(deps, programme, { agent: code, kind: 'thermo', entry: thermoEntry(constants(logK, steps), changes) })
  if (signed) await sign(deps, programme, 'record', id)
}
/** Sums of 10, 14, 18, 22 and 26: the line is that of the closed form in tests/science/ligands. */
const FIVE: readonly [number, number[]][] = [[12, [6, 4]], [15.5, [9, 5]], [17, [10, 8]], [21.5, [12, 10]], [24, [12, 10, 4]]]
const five = async () => { for (const [k, [logK, steps]] of FIVE.entries()) await measured(`L${k}`, logK, steps) }

describe('ligands side by side for one metal', () => {
  it('give a reason in words for size, hardness, sites, charge and shape [Shannon 1976: Gd(III) 110.7 pm at nine]', async () => {
    await register(deps, programme, { code: 'RING' })
    await register(deps, programme, { code: 'CHAIN', smiles: CHAIN, topology: 'openChain' })
    const answer = await choose()
    expect(answer).toMatchObject({ metal: 'Gd', ion: 'Gd(III)', radius_pm: 110.7, coordination: 9, waters: 1, coordinations: [6, 8, 9] })
    expect(hint(answer, 'RING-L', 'size')).toMatchObject({ leaning: 'for', reason: expect.stringMatching(/110\.7 pm.*ring of 12/) as string })
    expect(hint(answer, 'CHAIN-L', 'size').leaning).toBe('open')
    expect(hint(answer, 'RING-L', 'denticity')).toMatchObject({ leaning: 'for', reason: expect.stringContaining('8 donors for 8 sites') as string })
    expect([rowOf(answer, 'RING-L').ringAtoms, rowOf(answer, 'CHAIN-L').ringAtoms, rowOf(answer, 'RING-L').complexCharge]).toEqual([12, null, -1])
    expect(rowOf(answer, 'RING-L').unknown).toEqual(['log K', 'half-life in acid', 'formation', 'rate law'])
  })

  it('follow the coordination number and the waters asked for, and take the usual ones without', async () => {
    await register(deps, programme, { code: 'RING' })
    expect(hint(await choose({ metal: 'Ga' }), 'RING-L', 'denticity').reason).toMatch(/8 donors for 6 sites/)
    expect(hint(await choose({ coordination: '8', waters: '1' }), 'RING-L', 'denticity').reason).toMatch(/8 donors for 7 sites/)
    expect(hint(await choose({ metal: 'Ga', coordination: 9 }), 'RING-L', 'size').reason).toMatch(/No radius of Ga\(III\)/)
    expect(LigandChoiceQuery.safeParse({ metal: 'Xx' }).success).toBe(false)
    expect(LigandChoiceQuery.safeParse({ coordination: 'nine' }).success).toBe(false)
  })

  it('hold log K with another metal from the records of a competitor', async () => {
    await register(deps, programme, { code: 'A' })
    await enter(deps, programme, { agent: 'A', kind: 'thermo', entry: thermoEntry({ ...constants(24, [12, 9]), competitors: { Zn: 21.05 } }) })
    expect(rowOf(await choose({ metal: 'Zn' }), 'A-L').logK!.value.value).toBe(21.05)
    expect(rowOf(await choose({ metal: 'Gd' }), 'A-L').logK!.value.value).toBe(24)
    expect(rowOf(await choose({ metal: 'La' }), 'A-L').logK).toBeNull()
  })

  it('prefer a signed constant, and show each with its state and the number it comes from', async () => {
    await measured('A', 24, [12, 9])
    await enter(deps, programme, { agent: 'A', kind: 'thermo', entry: thermoEntry(constants(20, [12, 9])) })
    const { logK } = rowOf(await choose(), 'A-L')
    expect(logK).toMatchObject({ state: 'signed', value: { value: 24, evidenceId: expect.any(String) as string }, source: null })
  })

  it('name the pair that equilibrium and acid order differently, in one acid only', async () => {
    await measured('STRONG', 26, [12, 9])
    await measured('WEAK', 12, [9, 6])
    await enter(deps, programme, { agent: 'STRONG', kind: 'acidHalfLife', entry: hours(50) })
    await enter(deps, programme, { agent: 'WEAK', kind: 'acidHalfLife', entry: hours(250) })
    const answer = await choose()
    expect(answer.disagreements).toEqual([expect.stringMatching(/WEAK-L holds more weakly .* STRONG-L .*250 h against 50 h, 25.°C, 1.M.HCl/)])
    expect(rowOf(answer, 'WEAK-L').acidHalfLives).toMatchObject([{ value: { value: 250 * 3600 }, state: 'draft' }])
    await measured('WEAKER', 8, [8, 6])
    await enter(deps, programme, { agent: 'WEAKER', kind: 'acidHalfLife', entry: { ...hours(900), acid: choice('HClO4') } })
    expect((await choose()).disagreements).toEqual(answer.disagreements)
  })

  it('tell how soon the complex forms, with its pH, where a record says so', async () => {
    await register(deps, programme, { code: 'FAST' })
    await enter(deps, programme, {
      agent: 'FAST', kind: 'formation',
      entry: { time99: { type: 'quantity', kind: '<', value: 10, se: null, unit: 'min' }, pH: { type: 'number', value: 5.5, unit: '' }, excess: { type: 'number', value: 20, unit: '' }, temperature_K: { type: 'number', value: 25, unit: '°C' } },
    })
    const row = rowOf(await choose(), 'FAST-L')
    expect(row.formation).toMatchObject({ value: { value: 600, kind: '<' }, state: 'draft', conditions: expect.stringContaining('pH') as string })
    expect(row.unknown).not.toContain('formation')
  })

  it('show the programme its own ligands only, and literature where it is asked for, marked as such', async () => {
    await register(deps, await makeProgramme(deps), { code: 'FOREIGN' })
    await register(deps, programme, { code: 'OWN' })
    expect((await choose()).ligands.map(one => one.code)).toEqual(['OWN-L'])
    const answer = await choose({ library: '1' })
    const literature = answer.ligands.filter(one => one.origin === 'literature')
    expect(answer.ligands.filter(one => one.origin === 'programme').map(one => one.code)).toEqual(['OWN-L'])
    expect(literature.length).toBeGreaterThan(12)
    for (const { code, logK } of literature) if (logK) expect([code, logK.state, logK.value.evidenceId, logK.source]).toEqual([code, null, null, expect.stringMatching(/Literature, from the starter library|Rounded/)])
    expect(literature.find(one => one.code === 'NOTA')!.logK!.value.value).toBe(14.3)
    expect((await choose({ library: '1', metal: 'Ga' })).ligands.find(one => one.code === 'NOTA')!.logK!.value.value).toBe(30.98)
    expect(answer.constants.join(' ')).toMatch(/Citrate \(literature\) stands apart: .*0\.15 M/)
  })

  it('show those who see signed values the ligands of agents with one, and not what is missing', async () => {
    await measured('SIGNED', 24, [12, 9])
    await measured('DRAFT', 20, [10, 9], { signed: false })
    const { ligands } = await choose({}, 'signed')
    expect(ligands.map(one => [one.code, one.unknown, one.logK?.value.value])).toEqual([['SIGNED-L', null, 24]])
  })
})

describe('log K against ΣpKa', () => {
  it('estimates the ligand not yet measured by the line through the signed ones, with its prediction interval', async () => {
    await five()
    await register(deps, programme, { code: 'NEW', protonation: protonation([11, 9]) })
    const answer = await choose()
    const expected = estimateLogK(FIVE.map(([logK, steps], k) => ({ ligand: `L${k}-L`, sumPKa: steps.reduce((a, b) => a + b, 0), logK })), 20)
    if (!expected.ok) throw new Error(expected.message)
    expect(expected.logK).toBeCloseTo(19.5, 10)
    const row = rowOf(answer, 'NEW-L')
    expect(row.logK).toBeNull()
    expect(row.estimate).toMatchObject({ logK: expect.closeTo(19.5, 10) as number, low: expect.closeTo(expected.interval[0], 10) as number, high: expect.closeTo(expected.interval[1], 10) as number, warnings: [] })
    expect(row.unknown).toContain('log K')
    expect(answer.line).toMatch(/through 5 signed ligands: log K = 4\.50 \+ 0\.750/)
    expect(answer.figure!.table!.rows.filter(one => one.how === 'estimate, not measured')).toMatchObject([{ ligand: 'NEW-L', sum: 20, steps: 2, logK: 19.5 }])
    expect(rowOf(answer, 'L0-L').estimate).toBeNull()
    const [head, ...lines] = ligandCsv(answer).trim().split('\r\n')
    const rows = lines.filter(line => !line.startsWith('#') && !line.startsWith('"#'))
    expect(rows.map(line => line.split(',')[0])).toEqual(['L0-L', 'L1-L', 'L2-L', 'L3-L', 'L4-L', 'NEW-L'])
    const cellsOf = (line: string) => line.match(/("([^"]|"")*"|[^,]*)(,|$)/g)!.map(cell => cell.replace(/,$/, '').replace(/^"|"$/g, ''))
    const at = (line: string, column: string) => cellsOf(line)[cellsOf(head!).indexOf(column)]
    expect([at(rows[5]!, 'log K, kind'), at(rows[5]!, 'log K'), Number(at(rows[5]!, 'log K, estimate'))]).toEqual(['not known', '', expect.closeTo(19.5, 10)])
    expect([at(rows[0]!, 'log K, kind'), at(rows[0]!, 'log K'), at(rows[0]!, 'log K, state'), at(rows[0]!, 'log K, estimate')]).toEqual(['value', '12', 'signed', ''])
    expect(lines.at(-1)).toContain('not for diagnosis')
  })

  it('is no line below four signed ligands, and the words say how many there are', async () => {
    await measured('A', 12, [6, 4])
    await measured('B', 15, [9, 5])
    await measured('C', 17, [10, 8])
    await measured('D', 21, [12, 10], { signed: false })
    await register(deps, programme, { code: 'NEW', protonation: protonation([11, 9]) })
    const answer = await choose({ library: '1' })
    expect(answer.line).toMatch(/No line is drawn\. 3 ligands are measured\. Accepted: At least 4/)
    expect(answer.figure!.layers.some(layer => layer.type === 'line' || layer.type === 'band')).toBe(false)
    expect(rowOf(answer, 'NEW-L').estimate).toBeNull()
    expect(answer.figure!.layers.map(layer => layer.name)).toEqual(['literature', 'signed, on the line', 'not signed'])
  })

  it('leaves out a constant of another ionic strength and says why, and one of common practice', async () => {
    await five()
    await measured('SALTY', 14, [12, 8], { changes: { ionicStrength_M: { type: 'number', value: 1, unit: 'M' } } })
    await register(deps, programme, { code: 'CUSTOM', protonation: protonation([12, 9]) })
    await sign(deps, programme, 'record', (await enter(deps, programme, { agent: 'CUSTOM', kind: 'thermo', entry: { logK: { type: 'quantity', kind: '=', value: 26, se: null, unit: '' }, method: choice('practice') } })).id)
    const { figure, line, ligands } = await choose()
    expect(ligands.find(one => one.code === 'CUSTOM-L')).toMatchObject({ logK: { value: { value: 26 } }, estimate: null, notes: [expect.stringContaining('common practice')] })
    expect(line).toMatch(/through 5 signed ligands/)
    expect(line).toMatch(/SALTY-L is not on the line: .*1 M/)
    expect(figure!.table!.rows.filter(one => one.how === 'signed, not on the line').map(one => one.ligand)).toEqual(['CUSTOM-L', 'SALTY-L'])
  })

  it('draws no bound as a point, and warns where the estimate is extrapolated or ΣpKa is of another medium', async () => {
    await five()
    await measured('BOUND', 30, [12, 9], { changes: { logK: { type: 'quantity', kind: '>', value: 30, se: null, unit: '' } } })
    await register(deps, programme, { code: 'FAR', protonation: protonation([12, 12, 10]) })
    await register(deps, programme, { code: 'WARM', protonation: { ...protonation([11, 9]), temperature_K: 310.15 } })
    const answer = await choose()
    expect(answer.figure!.table!.rows.map(one => one.ligand)).not.toContain('BOUND-L')
    expect(rowOf(answer, 'BOUND-L')).toMatchObject({ logK: { value: { kind: '>' } }, estimate: null })
    expect(rowOf(answer, 'FAR-L').estimate!.warnings).toEqual([expect.stringContaining('extrapolated')])
    expect(rowOf(answer, 'WARM-L').estimate!.warnings).toEqual([expect.stringMatching(/310\.15 K/)])
  })

  it('reads a ligand that was copied alone, with the protonation constants it was registered with', async () => {
    await copyFromLibrary(deps, { actor: programme.people.chemist, programmeId: programme.id, body: LibraryCopyInput.parse({ ligand: 'triacetate', into: { kind: 'ligand', ligandCode: 'MINE' }, records: [] }) })
    const row = rowOf(await choose(), 'MINE')
    expect(row).toMatchObject({ origin: 'programme', agents: [], logK: null, sumPKa: { value: 28.74, steps: 4 } })
    expect((await choose({}, 'signed')).ligands).toEqual([])
  })
})
