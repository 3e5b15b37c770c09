import { describe, expect, it } from 'vitest'
import { METHOD_TITLES } from '#shared/measurements/exchange/methods'
import { exchangeZSpectrum } from '#shared/measurements/exchange/zspectrum'
import type { AnalysisInput } from '#shared/measurements/types'
import { blocking, done, evidenceOf, inputFrom, readAs } from '../support/kineticsTables'
import { range } from '../support/zSpectra'
import { B1S_uT, longTable, OFFSETS_ppm, simulate, wideTable, Z_LINES, type SpectraPlan } from '../support/zSpectrumTables'

const K = 1200
const plain = longTable(simulate({ k_per_s: K }))
const kind = exchangeZSpectrum
const without = (...words: string[]) => Z_LINES.filter(line => !words.some(word => line.startsWith(word)))
const inputOf = (plan: Partial<SpectraPlan> = {}, lines: readonly string[] = Z_LINES, change: Partial<AnalysisInput> = {}) => inputFrom(kind, longTable(simulate({ k_per_s: K, ...plan }), { lines }), change)
const flagIds = (input: AnalysisInput) => { const outcome = done(kind, input); return [...outcome.flags, ...outcome.tubes.flatMap(tube => tube.flags)].map(flag => flag.id) }

describe('Z-spectra from a table [Bloch–McConnell equations by the matrix exponential of tests/support]', () => {
  it.each([
    ['a row per reading', plain],
    ['a row per reading, offsets in Hz', longTable(simulate({ k_per_s: K }), { unit: 'Hz' })],
    ['a column per spectrum', wideTable(simulate({ k_per_s: K }))],
  ])('%s: the same exchange rate', (_, lines) => {
    const understood = readAs(kind, lines)
    expect(understood.problems.map(problem => problem.id)).toEqual([])
    const outcome = done(kind, inputFrom(kind, lines))
    const { headline } = outcome.series
    expect(headline.name).toBe('kex_per_s')
    expect(Math.abs(headline.value / K - 1)).toBeLessThan(0.05)
    expect(Math.abs(headline.value - K)).toBeLessThan(4 * headline.se!)
    expect(headline.interval![0]).toBeLessThan(headline.value)
    expect(outcome.series.points).toHaveLength(B1S_uT.length)
    expect(Math.abs(outcome.series.parameters.find(one => one.name.startsWith('protonRatio'))!.value - 1)).toBeLessThan(0.1)
  })

  it('finds the water of every spectrum and centres it, draws Z over the offset from water, right to left', () => {
    const outcome = done(kind, inputOf({ shift_ppm: 0.22 }))
    const [tube] = outcome.tubes
    const shifts = tube!.parameters.filter(one => one.name.startsWith('waterShift'))
    expect(shifts).toHaveLength(B1S_uT.length)
    shifts.forEach(one => expect(Math.abs(one.value - 0.22)).toBeLessThan(0.02))
    expect(kind.tubeFigure(tube!)).toMatchObject({ x: { label: 'Offset from water', unit: 'ppm', reversed: true }, y: { label: 'Z' } })
    expect(kind.tubeFigure(tube!).layers.filter(layer => layer.type === 'line')).toHaveLength(B1S_uT.length)
    expect(kind.tubeFigure(tube!).strip!.points).toHaveLength(tube!.points.length)
    expect(kind.seriesFigure(outcome)).toMatchObject({ x: { label: 'B_1', unit: 'µT' }, y: { label: 'MTR_{Rex}' } })
    expect(tube!.points).toHaveLength(B1S_uT.length * OFFSETS_ppm.length)
    expect(tube!.points.every(point => [point.x, point.y, point.fitted].every(Number.isFinite))).toBe(true)
  })

  it('takes the shift from a weak scan where there is one, and uses that scan for nothing else', () => {
    const readings = [...simulate({ k_per_s: K, b1s_uT: [0.2], tsats_s: [1], offsets_ppm: range(-2, 2, 0.1) }), ...simulate({ k_per_s: K })]
    const lines = [...Z_LINES, 'B1 of the water scan: 0.3 µT']
    const outcome = done(kind, inputFrom(kind, longTable(readings, { lines })))
    const shifts = outcome.tubes[0]!.parameters.filter(one => one.name.startsWith('waterShift'))
    expect(new Set(shifts.map(one => one.value)).size).toBe(1)
    expect(Math.abs(shifts[0]!.value - 0.15)).toBeLessThan(0.01)
    expect(outcome.method).toContain('weak saturation by maximum symmetry')
    expect(outcome.series.points).toHaveLength(B1S_uT.length)
    const none = done(kind, inputFrom(kind, longTable(readings, { lines }), { options: { waterShift: 'none' } }))
    expect(none.tubes[0]!.flags.map(flag => flag.id)).toContain('noShift')
  })

  it('takes a drift of S0 out, and flags it', () => {
    const still = done(kind, inputOf({ noise: 1e-5 })).tubes[0]!.headline!.value
    const drifting = inputOf({ noise: 1e-5, drift: 0.3 })
    expect(done(kind, drifting).tubes[0]!.headline!.value / still).toBeCloseTo(1, 3)
    expect(flagIds(drifting)).toContain('s0Drift')
  })
})

describe('methods side by side', () => {
  it('gives every method with its rate and what it assumes, and no flag where all hold', () => {
    const input = inputOf({ b1s_uT: B1S_uT, tsats_s: [2, 5, 15], noise: 0.0015 })
    const outcome = done(kind, input)
    expect(outcome.series.statistics.map(one => one.label)).toEqual(Object.entries(METHOD_TITLES).flatMap(([id, title]) => id === 'globalTwo' ? [] : [title]))
    for (const { label, value, text } of outcome.series.statistics) {
      expect([label, Math.abs(value! / K - 1) < 0.05]).toEqual([label, true])
      expect(text).toMatch(/s⁻¹\. .*(steady|build-up|saturation time)/i)
    }
    expect(outcome.flags.map(flag => flag.id)).toEqual([])
  })

  it.each(Object.keys(METHOD_TITLES).filter(id => id !== 'globalTwo'))('%s chosen: its own rate, figure and evidence', (modelId) => {
    const input = inputOf({ tsats_s: [2, 5, 15], noise: 5e-4 }, Z_LINES, { modelId })
    const outcome = done(kind, input)
    expect(Math.abs(outcome.series.headline.value / K - 1)).toBeLessThan(0.05)
    expect(outcome.series.points.every(point => Number.isFinite(point.fitted) && Math.abs(point.fitted / point.y - 1) < 0.2)).toBe(true)
    expect(kind.seriesFigure(outcome)!.layers.find(layer => layer.type === 'points')).toBeDefined()
    expect(evidenceOf(kind, input).kex_per_s!.detail.method).toBe(METHOD_TITLES[modelId as keyof typeof METHOD_TITLES])
  })

  it('fits the Bloch–McConnell equations through all spectra at once: right before the steady state, where the others are not, with the error of B1', () => {
    const input = inputOf({ tsats_s: [2.5], noise: 5e-4 }, [...Z_LINES, 'B1 error: 5 %'], { modelId: 'global' })
    const { headline } = done(kind, input).series
    expect(Math.abs(headline.value / K - 1)).toBeLessThan(0.01)
    // its error of B1 is what a fit with B1 moved by it does
    const moved = [1.05, 0.95].map(scale => done(kind, inputFrom(kind, longTable(simulate({ k_per_s: K, tsats_s: [2.5], noise: 5e-4 }).map(one => ({ ...one, b1_uT: one.b1_uT * scale }))), { modelId: 'global' })).series.headline.value)
    expect(headline.se! / Math.abs((moved[0]! - moved[1]!) / 2)).toBeCloseTo(1, 1)
    expect(flagIds(input)).not.toContain('notSteady')
  })

  it('fits a second pool where it is asked for, and says that one pool does not describe the spectra', () => {
    const more = [{ offset_ppm: -45, fraction: 3e-4, k_per_s: 500, rate1_per_s: 1, rate2_per_s: 1 }]
    const input = inputOf({ more, noise: 1e-3, b1s_uT: [2.5, 5, 10] }, Z_LINES, { modelId: 'global' })
    const [one, two] = ['global', 'globalTwo'].map(modelId => done(kind, { ...input, modelId })) as [ReturnType<typeof done>, ReturnType<typeof done>]
    expect(one.flags.map(flag => flag.id)).toContain('modelMisfit')
    expect(two.flags.map(flag => flag.id)).not.toContain('modelMisfit')
    expect(Math.abs(two.series.headline.value / K - 1)).toBeLessThan(0.02)
    expect(two.series.statistics.map(each => each.label)).toContain(METHOD_TITLES.globalTwo)
  })

  it('says why a method says nothing, instead of a rate', () => {
    const outcome = done(kind, inputOf())
    expect(outcome.series.statistics.find(one => one.label === 'QUEST')).toMatchObject({ value: null, text: expect.stringContaining('three') as string })
    const refused = kind.analyse(inputOf({}, Z_LINES, { modelId: 'quest' }))
    expect(refused).toMatchObject({ ok: false, reason: 'tooFewTimes' })
    expect(refused.tubes[0]!.headline!.name).toBe('mtrAsym')
  })

  it('flags a saturation too short, a narrow range of B1, and points at methods that disagree then', () => {
    const short = flagIds(inputOf({ tsats_s: [2.5], noise: 2e-4 }))
    expect(short).toEqual(expect.arrayContaining(['notSteady', 'methodsDisagree']))
    expect(flagIds(inputOf({ b1s_uT: [0.8, 1.2, 1.6, 2], noise: 2e-4 }))).toContain('alphaNotBracketed')
    expect(flagIds(inputOf({}, without('R2 of the pool')))).toContain('r2sNeglected')
    expect(flagIds(inputOf({}, without('R1w')))).toContain('steadyUnknown')
  })

  it('flags a dip that is narrower than the offsets can show', () => {
    const coarse = [...range(-80, -10, 5), ...range(-5, 5, 0.5), ...range(10, 80, 5)].map(at => at > 40 || at < -40 ? at + 0.9 : at)
    expect(flagIds(inputOf({ offsets_ppm: coarse, noise: 5e-4 }, [...without('Pool width'), 'Pool width: 20 ppm']))).toContain('coarseSpacing')
  })

  it('carries the error of B1 into k', () => {
    const bare = done(kind, inputOf()).series.headline
    const carried = done(kind, inputOf({}, [...Z_LINES, 'B1 error: 5 %'])).series.headline
    expect(Math.sqrt(carried.se! ** 2 - bare.se! ** 2) / carried.value).toBeCloseTo(0.05, 2)
  })

  it('reads one side of water by the plain omega plot alone, flagged', () => {
    const input = inputOf({ offsets_ppm: range(-5, 60, 0.5) }, Z_LINES, { modelId: 'omega' })
    expect(Math.abs(done(kind, input).series.headline.value / K - 1)).toBeLessThan(0.06)
    expect(flagIds(input)).toContain('mirrorOutside')
    expect(kind.analyse({ ...input, modelId: 'quespInverse' })).toMatchObject({ ok: false, reason: 'noReference' })
  })
})

describe('the concentration that is seen in tissue', () => {
  const TISSUE = ['Drop to be seen: 3', 'B1 in tissue: 8 µT', 'Saturation time in tissue: 3 s', 'Tissue R1: 0.6', 'Tissue R2: 12', 'Agent r1: 0.02', 'Agent r2: 0.04']
  const MACROMOLECULES = ['MT ratio: 5 %', 'MT exchange: 40', 'MT T2: 10 µs']
  const withDrop = (points: number) => [...Z_LINES, ...TISSUE.map(line => line.startsWith('Drop') ? `Drop to be seen: ${points}` : line)]

  it('is evidence, with its interval, where the conditions name tissue and drop, and is none where they do not', () => {
    expect(evidenceOf(kind, inputOf()).workingConcentration_mM).toBeUndefined()
    const { workingConcentration_mM: seen } = evidenceOf(kind, inputOf({}, withDrop(3)))
    expect(seen!.value.kind).toBe('=')
    const [low, high] = seen!.value.interval!
    expect(low).toBeLessThan(seen!.value.value)
    expect(high).toBeGreaterThan(seen!.value.value)
    expect(seen!.conditions).toMatchObject({ b0_T: 7, pH: 7.4, temperature_K: 298.15 })
    expect(seen!.detail).toMatchObject({ detectDrop_points: 3, tissueRate2_per_s: 12 })
  })

  it('grows with the drop asked for, and is a bound where it is not reached', () => {
    const at = (points: number) => done(kind, inputOf({}, withDrop(points))).series.parameters.find(one => one.name === 'workingConcentration_mM')!
    expect(at(5).value).toBeGreaterThan(at(2).value)
    expect(at(90)).toMatchObject({ kind: '>', value: 100, se: null, interval: null })
    // strong saturation of a large macromolecular pool leaves the agent nothing to take
    expect(done(kind, inputOf({}, [...withDrop(2), ...MACROMOLECULES])).series.parameters.find(one => one.name === 'workingConcentration_mM')).toMatchObject({ kind: '>' })
    expect(flagIds(inputOf({}, withDrop(2)))).toContain('noMacromolecules')
  })
})

describe('several tubes', () => {
  it('takes the mean of concentrations at one pH, and keeps rates of different pH apart, each its own evidence', () => {
    const readings = [
      ...simulate({ name: 'a', k_per_s: 800, pH: 6.8 }), ...simulate({ name: 'b', k_per_s: 1600, pH: 7.4 }), ...simulate({ name: 'c', k_per_s: 1600, pH: 7.4, conc_mM: 40 }),
    ]
    const input = inputFrom(kind, longTable(readings))
    const outcome = done(kind, input)
    expect(Math.abs(outcome.series.headline.value / 1600 - 1)).toBeLessThan(0.05)
    expect(outcome.series.parameters.map(one => one.label)).toEqual(expect.arrayContaining(['k_{ex}, pH 7.4, 25 °C', 'k_{ex}, pH 6.8, 25 °C']))
    const drafts = kind.evidence(outcome, input)
    expect(drafts.map(draft => [draft.quantity, draft.conditions.pH, draft.detail.nSamples])).toEqual([['kex_per_s', 7.4, 2], ['kex_per_s', 6.8, 1]])
    expect(drafts[0]!.conditions).toMatchObject({ b0_T: 7, temperature_K: 298.15, medium: 'buffer' })
    drafts.forEach(draft => expect(draft.value.se!).toBeGreaterThan(0))
  })

  it('leaves out readings and tubes with their reasons, and shows them', () => {
    const readings = [...simulate({ name: 'a', k_per_s: K }), ...simulate({ name: 'b', k_per_s: K })]
    const input = inputFrom(kind, longTable(readings))
    const outcome = done(kind, { ...input, exclusions: [{ tubeNo: 1, pointIndex: 30, reason: 'spike' }, { tubeNo: 2, pointIndex: null, reason: 'bubble' }] })
    expect(outcome.tubes[0]!.points.find(point => point.index === 30)).toMatchObject({ excluded: 'spike', fitted: null })
    expect(outcome.tubes[1]).toMatchObject({ excluded: 'bubble', headline: null, refusal: { reason: 'leftOut' } })
    expect(outcome.series.points.every(point => point.tubeNo === 1)).toBe(true)
    expect(() => kind.analyse({ ...input, exclusions: [{ tubeNo: 9, pointIndex: null, reason: 'x' }] })).toThrow('no tube 9')
  })

  it('is the same each time, and keeps no number that is none', () => {
    const input = inputOf()
    const text = JSON.stringify(done(kind, input))
    expect(JSON.stringify(done(kind, input))).toBe(text)
    const broken: string[] = []
    JSON.parse(JSON.stringify(done(kind, input)), (key, value: unknown) => { if (typeof value === 'number' && !Number.isFinite(value)) broken.push(key); return value })
    JSON.stringify(done(kind, input), (key, value: unknown) => { if (typeof value === 'number' && !Number.isFinite(value)) broken.push(key); return value })
    expect(broken).toEqual([])
  })
})

describe('bad input [issue 5]', () => {
  const problems = (lines: readonly string[]) => readAs(kind, lines).problems
  const idsOf = (lines: readonly string[]) => problems(lines).map(problem => problem.id)

  it.each<[string, string, readonly string[]]>([
    ['no S0', 'noS0', longTable(simulate({ k_per_s: K }), { lines: without('S0 from') }).map(line => line.replace(',-300,', ',-299,'))],
    ['no B1', 'noB1', [...Z_LINES, '', 'tube,conc (mM),saturation time (s),offset (ppm),signal', ...simulate({ k_per_s: K, b1s_uT: [4] }).map(one => [one.name, 20, 15, one.offset_ppm, one.signal].join(','))]],
    ['no saturation time', 'noTsat', [...Z_LINES, '', 'tube,conc (mM),B1 (µT),offset (ppm),signal', ...simulate({ k_per_s: K, b1s_uT: [4] }).map(one => [one.name, 20, 4, one.offset_ppm, one.signal].join(','))]],
    ['B1 of zero throughout', 'noSaturation', longTable(simulate({ k_per_s: K, b1s_uT: [4] }).map(one => ({ ...one, b1_uT: 0 })))],
    ['three offsets', 'fewOffsets', longTable(simulate({ k_per_s: K, offsets_ppm: [-50, 0, 50] }))],
    ['no offset of the pool', 'condition', longTable(simulate({ k_per_s: K }), { lines: without('Pool offset') })],
  ])('%s blocks: %s', (_, id, lines) => {
    expect(blocking(readAs(kind, lines))).toContain(id)
    problems(lines).forEach(problem => expect(problem.accepted.length).toBeGreaterThan(5))
  })

  it.each<[string, string, readonly string[]]>([
    ['one side of water', 'oneSided', longTable(simulate({ k_per_s: K, offsets_ppm: range(0, 70, 1) }))],
    ['a pool outside the range', 'poolOutside', longTable(simulate({ k_per_s: K, offsets_ppm: range(-30, 30, 1) }))],
    ['an offset twice', 'repeatedOffsets', longTable(simulate({ k_per_s: K, offsets_ppm: [...OFFSETS_ppm, 50] }))],
    ['hertz under a head of ppm', 'offsetUnit', longTable(simulate({ k_per_s: K }), { unit: 'Hz', lines: without('S0 from') }).map(line => line.replace('offset (Hz)', 'offset (ppm)'))],
    ['ppm under a head of hertz', 'offsetUnit', longTable(simulate({ k_per_s: K })).map(line => line.replace('offset (ppm)', 'offset (Hz)'))],
  ])('%s is asked about: %s', (_, id, lines) => {
    expect(problems(lines).filter(problem => problem.severity === 'asks').map(problem => problem.id)).toContain(id)
  })

  it('asks for the unit of offsets that have none', () => {
    expect(idsOf(plain.map(line => line.replace('offset (ppm)', 'offset')))).toContain('unit')
  })

  it('refuses by value what is saturated to zero everywhere, with the reason', () => {
    const dead = simulate({ k_per_s: K }).map(one => Math.abs(one.offset_ppm) === 300 ? one : { ...one, signal: 0 })
    const outcome = kind.analyse(inputFrom(kind, longTable(dead)))
    expect(outcome.ok).toBe(false)
    expect(outcome.tubes[0]!.flags.map(flag => flag.id)).toEqual(expect.arrayContaining(['saturatedEverywhere', 'saturatedPool']))
  })
})
