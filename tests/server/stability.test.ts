import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { makeDeps, makeProgramme, type TestDeps, type TestProgramme } from '../support/factory'
import { PUBLISHED, rateLawEntry, thermoEntry, type PublishedConstants } from '../support/publishedRecords'
import { AgentStabilityDto, StabilityDto } from '../../shared/schemas/stability'
import { listAgents } from '../../server/services/listAgents'
import { showAgentStability, showStability } from '../../server/services/showStability'
import { CHAIN, enter, register, RING, sign } from '../support/registry'

let deps: TestDeps
let programme: TestProgramme
beforeAll(() => { deps = makeDeps() })
afterAll(() => deps.close())
beforeEach(async () => { programme = await makeProgramme(deps) })

/** Registers an agent and types its published constants and rate law. */
async function enterAgent(code: string, constants: PublishedConstants, rates: Parameters<typeof rateLawEntry>[0] | null, ring: boolean, changes: Parameters<typeof thermoEntry>[1] = {}) {
  await register(deps, programme, { code, smiles: ring ? RING : CHAIN, topology: ring ? 'ring' : 'openChain' })
  const ids = [(await enter(deps, programme, { agent: code, kind: 'thermo', entry: thermoEntry(constants, changes) })).id]
  if (rates) ids.push((await enter(deps, programme, { agent: code, kind: 'rateLaw', entry: rateLawEntry(rates) })).id)
  return ids
}
const overview = async (scope: 'programme' | 'signed' = 'programme') => StabilityDto.parse(await showStability(deps, { programmeId: programme.id, scope }))
const rowOf = async (code: string) => (await overview()).agents.find(one => one.code === code)!

describe('stability of agents under the profile', () => {
  it('reads the published pGd, 19.1 and 15.8, and names profile and competitors [Cacheris et al. 1990]', async () => {
    await enterAgent('GD-DTPA', PUBLISHED.dtpa, null, false)
    await enterAgent('GD-BMA', PUBLISHED.dtpaBma, null, false)
    const { agents, conditions } = await overview()
    expect(agents.map(one => one.pM!.value.value)).toEqual([expect.closeTo(15.8, 1), expect.closeTo(19.1, 1)])
    expect(conditions).toMatchObject({ pH: 7.4, temperature_K: 310.15, competitors: expect.stringContaining('exchangeable Zn 10 µM') as string, profileName: expect.stringContaining('starting values') as string })
  })

  it('ranks an open chain and its bisamide within a factor of 1.5 and both at least 1000 above the ring, with exchangeable Zn 10 µM and Cu 1 µM [Sarka et al. 2000, 2002; Wang et al. 1992]', async () => {
    await enterAgent('GD-DTPA', PUBLISHED.dtpa, { k1_per_M_s: { value: 0.58 }, kZn_per_M_s: { value: 0.056 }, kCu_per_M_s: { value: 0.93 } }, false)
    await enterAgent('GD-BMA', PUBLISHED.dtpaBma, { k1_per_M_s: { value: 12.7 }, kZn_per_M_s: { value: 0.0078 }, kCu_per_M_s: { value: 0.63 } }, false)
    await enterAgent('GD-DOTA', PUBLISHED.dota, { k1_per_M_s: { value: 8.4e-6 } }, true)
    const [bma, dota, dtpa] = (await overview()).agents.map(one => one.kd!.value.value) as [number, number, number]
    expect(Math.max(bma / dtpa, dtpa / bma)).toBeLessThan(1.5)
    expect(Math.min(bma, dtpa) / dota).toBeGreaterThan(1000)
  })

  it('counts the decades of extrapolation and keeps a bound a bound: half-life "more than"', async () => {
    await enterAgent('GD-DOTA', PUBLISHED.dota, { k0_per_s: { value: 5e-8, kind: '<' }, k1_per_M_s: { value: 8.4e-6, se: 1e-6 } }, true)
    const row = await rowOf('GD-DOTA')
    expect(row.decades).toBeCloseTo(7.4 - 5.2, 6)
    expect([row.kd!.value.kind, row.halfLife!.value.kind]).toEqual(['<', '>'])
    expect(row.halfLife!.value.value).toBeLessThanOrEqual(Math.LN2 / 5e-8)
    expect(row.flags.join(' ')).toMatch(/Extrapolated: pH 7.4 lies 2.2 decades/)
  })

  it('gives two verdicts that may disagree: the bisamide is the one that equilibrium condemns', async () => {
    await enterAgent('GD-BMA', PUBLISHED.dtpaBma, { k1_per_M_s: { value: 12.7 } }, false)
    const { verdict } = await rowOf('GD-BMA')
    expect(verdict.equilibrium).toBe('condemns')
    expect(verdict.kineticsSentence).toMatch(/lets go before it is eliminated \(model\)/)
  })

  it('says "not known" where nothing was entered, and shows no number', async () => {
    await register(deps, programme, { code: 'EMPTY' })
    const row = await rowOf('EMPTY')
    expect([row.kd, row.halfLife, row.pM, row.logK, row.decades]).toEqual([null, null, null, null, null])
    expect([row.verdict.equilibrium, row.verdict.kinetics]).toEqual(['not known', 'not known'])
  })

  it('flags constants of different media instead of mixing them silently', async () => {
    const protonation = { stepwiseLogK: PUBLISHED.dota.protonation.map(value => ({ value, se: null })), temperature_K: 298.15, ionicStrength_M: 0.15, medium: 'NaCl', source: 'a test source' }
    await register(deps, programme, { code: 'GD-DOTA', protonation })
    const { protonation: _, protonationForm: __, ...entry } = thermoEntry(PUBLISHED.dota)
    await enter(deps, programme, { agent: 'GD-DOTA', kind: 'thermo', entry })
    const row = await rowOf('GD-DOTA')
    expect(row.flags.join(' ')).toMatch(/different media.*NMe4Cl and NaCl/)
    expect(row.pM!.note).toMatch(/different media/)
  })

  it('tells signed from unsigned: the state is that of the least certain value behind a number', async () => {
    const [thermo, rates] = await enterAgent('GD-DTPA', PUBLISHED.dtpa, { k1_per_M_s: { value: 0.58 } }, false)
    await sign(deps, programme, 'record', thermo!)
    expect([(await rowOf('GD-DTPA')).pM!.state, (await rowOf('GD-DTPA')).kd!.state]).toEqual(['signed', 'draft'])
    expect((await overview('signed')).agents[0]!.kd).toBeNull()
    await sign(deps, programme, 'record', rates!)
    expect((await overview('signed')).agents[0]!.kd!.state).toBe('signed')
  })

  it('lists pM and k of every agent with the same values as the stability page', async () => {
    await enterAgent('GD-DTPA', PUBLISHED.dtpa, { k1_per_M_s: { value: 0.58 } }, false)
    const [listed] = (await listAgents(deps, { programmeId: programme.id, scope: 'programme' })).agents
    const row = await rowOf('GD-DTPA')
    expect([listed!.pM!.value.value, listed!.kd!.value.value]).toEqual([expect.closeTo(row.pM!.value.value, 9), row.kd!.value.value])
    expect(listed!.gaps!.map(one => one.what).join(' ')).toMatch(/free metal/)
  })
})

describe('half-lives in acid', () => {
  const acid = (hours: number, acid_M: number, kind: '=' | '>' | '<' = '=') => ({
    halfLife: { type: 'quantity' as const, kind, value: hours, se: null, unit: 'h' }, acid_M: { type: 'number' as const, value: acid_M, unit: 'M' }, acid: { type: 'choice' as const, choice: 'HCl' }, temperature_K: { type: 'number' as const, value: 25, unit: '°C' },
  })
  const logK = (value: number) => thermoEntry(PUBLISHED.dota, { logK: { type: 'quantity', kind: '=', value, se: 0.1, unit: '' } })
  async function enterBoth(code: string, value: number, hours: number, kind: '=' | '>' | '<' = '=') {
    await register(deps, programme, { code, smiles: RING, topology: 'ring' })
    await enter(deps, programme, { agent: code, kind: 'thermo', entry: logK(value) })
    await enter(deps, programme, { agent: code, kind: 'acidHalfLife', entry: acid(hours, 2.5, kind) })
  }

  it('put the tetraamide above its tetraacetate parent in the same acid and below it on log K, and say so [common practice, no source]', async () => {
    await enterBoth('ACETATE', 26, 50)
    await enterBoth('AMIDE', 12, 250)
    const { inAcid } = await overview()
    expect(inAcid).toHaveLength(1)
    expect(inAcid[0]!.condition).toMatch(/2\.5.M HCl/)
    expect(inAcid[0]!.rows.map(row => [row.code, row.logK!.value.value, row.halfLife.value.value])).toEqual([['AMIDE', 12, 250 * 3600], ['ACETATE', 26, 50 * 3600]])
    expect(inAcid[0]!.remarks).toEqual([expect.stringMatching(/^AMIDE holds its metal less strongly at equilibrium than ACETATE \(log K 12\.0 against 26\.0\) and lets go 5\.0 times more slowly in this acid/)])
  })

  it('are never laid together from different acids, and a bound on the wrong side proves nothing', async () => {
    await enterBoth('ACETATE', 26, 50, '>')
    await enterBoth('AMIDE', 12, 250)
    await enter(deps, programme, { agent: 'AMIDE', kind: 'acidHalfLife', entry: acid(2000, 0.1) })
    const { inAcid } = await overview()
    expect(inAcid.map(table => table.rows.length)).toEqual([2, 1])
    expect(inAcid.flatMap(table => table.remarks)).toEqual([])
  })
})

describe('stability of one agent', () => {
  const detail = async (code: string) => AgentStabilityDto.parse(await showAgentStability(deps, { programmeId: programme.id, scope: 'programme', code }))

  it('draws the conditional constant against pH through its value at pH 7.4, and the rate solid only where it was measured', async () => {
    await enterAgent('GD-DTPA', PUBLISHED.dtpa, { k1_per_M_s: { value: 0.58, se: 0.05 } }, false)
    const { conditionalFigure, rateFigure, agent, records } = await detail('GD-DTPA')
    const curve = conditionalFigure!.layers.find(one => one.type === 'line' && one.name === 'GdL')
    const at = curve?.type === 'line' ? curve.points.find(point => Math.abs(point.x - 7.4) < 1e-9)! : null
    expect(at!.y).toBeCloseTo(agent.logKConditional!.value.value, 9)
    const measured = rateFigure!.layers.find(one => one.type === 'line' && one.name === 'measured')
    expect(measured?.type === 'line' && measured.points.every(point => point.x >= 3.5 - 1e-9 && point.x <= 5.2 + 1e-9)).toBe(true)
    expect(records.map(one => one.kind).sort()).toEqual(['rateLaw', 'thermo'])
  })

  it('gives the species diagram its constants, each with the evidence it comes from, and the half-lives of all agents', async () => {
    await enterAgent('GD-DTPA', PUBLISHED.dtpa, { k1_per_M_s: { value: 0.58 } }, false)
    await enterAgent('GD-DOTA', PUBLISHED.dota, { k0_per_s: { value: 1e-9 } }, true)
    const { speciation, halfLives } = await detail('GD-DTPA')
    expect(speciation).toMatchObject({ metal: 'Gd', logK: 22.46, ligandProtonation: PUBLISHED.dtpa.protonation, competitors: ['Ca', 'Zn', 'Cu'] })
    const own = speciation!.species.find(one => one.name === 'LnL')!
    expect(own).toMatchObject({ logBeta: 22.46, stoichiometry: { Ln: 1, L: 1 } })
    expect(own.evidenceId).toMatch(/^[0-9a-f-]{36}$/)
    expect(speciation!.species.filter(one => one.evidenceId === null).map(one => one.name)).toEqual(['Ln(OH)'])
    expect(halfLives.map(one => one.code).sort()).toEqual(['GD-DOTA', 'GD-DTPA'])
  })

  it('has no figure where there is nothing to draw', async () => {
    await register(deps, programme, { code: 'EMPTY' })
    const { conditionalFigure, rateFigure, speciation } = await detail('EMPTY')
    expect([conditionalFigure, rateFigure, speciation]).toEqual([null, null, null])
  })

  it('is not found from another programme', async () => {
    await register(deps, programme, { code: 'GD-DTPA' })
    const other = await makeProgramme(deps)
    await expect(showAgentStability(deps, { programmeId: other.id, scope: 'programme', code: 'GD-DTPA' })).rejects.toMatchObject({ code: 'notFound' })
  })
})
