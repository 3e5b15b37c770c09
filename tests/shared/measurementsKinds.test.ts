import { describe, expect, it } from 'vitest'
import { measurement, MEASUREMENTS } from '#shared/measurements'
import { guessKind } from '#shared/measurements/guessKind'
import type { AnalysisInput, AnalysisOutcome } from '#shared/measurements/types'
import { understandTable } from '#shared/measurements/tabular/understand'
import { demoFileText } from '../../db/seeds/demo/forward'
import { DEMO_FILES } from '../../db/seeds/demo/series'
import { DEMO_TITRATIONS, titrationText } from '../../db/seeds/demo/titrations'

const TRUTH = Object.fromEntries(DEMO_FILES.flatMap(file => file.parts.map(part => [file.fileName, part.r_per_mM_s])))

function inputOf(fileName: string, change: Partial<AnalysisInput> = {}): AnalysisInput {
  const file = DEMO_FILES.find(one => one.fileName === fileName)!
  const [part] = file.parts
  const understood = understandTable({ text: demoFileText(file).replace(/^\uFEFF/, ''), kind: measurement(file.kind), draft: { complexCode: part!.agent, lot: part!.lot } })
  expect(understood.problems.filter(problem => problem.severity === 'blocks')).toEqual([])
  const kind = measurement(file.kind)
  return { kind: file.kind, conditions: understood.conditions, tubes: understood.series[0]!.tubes, exclusions: [], modelId: kind.defaultModel(understood.conditions), options: {}, seed: 'kinds', ...change }
}

function analysed(input: AnalysisInput): Extract<AnalysisOutcome, { ok: true }> {
  const outcome = measurement(input.kind).analyse(input)
  if (!outcome.ok) throw new Error(outcome.message)
  return outcome
}

describe('from a file to a relaxivity, by every way to measure it [forward model of the demonstration]', () => {
  it.each([
    ['SK-03_A1_saturation.csv', 'saturation recovery'], ['SK-04_A1_look_locker.csv', 'Look–Locker train of 6° pulses'], ['SK-06_A1_flip_angles.csv', 'spoiled gradient echo at several flip angles, TR 12 ms'],
    ['SK-02_A1_T2_echoes.csv', 'multi-echo train, echo spacing 8 ms, refocusing 180°'],
  ])('%s', (fileName, words) => {
    const { series, method, tubes } = analysed(inputOf(fileName))
    const { value, se } = series.headline
    // Pipetting of 0.6 % is in the scatter; the common concentration error is in the standard error.
    expect(Math.abs(value - TRUTH[fileName]!)).toBeLessThan(3 * se!)
    expect(method).toContain(words)
    expect(tubes.every(tube => tube.headline !== null && tube.correlation !== undefined && tube.intervalMethod !== undefined)).toBe(true)
  })
  it('takes B1 of each tube into account: without it T1 is off by twice its error [Fram et al. 1987; B1² of a small angle]', () => {
    const input = inputOf('SK-06_A1_flip_angles.csv')
    const bare = { ...input, tubes: input.tubes.map(tube => ({ ...tube, points: { columns: tube.points.columns.slice(0, 2), rows: tube.points.rows.map(row => row.slice(0, 2)) } })) }
    const scale = input.tubes.map(tube => tube.points.rows[0]![tube.points.columns.indexOf('b1Scale')]!)
    const [withB1, without] = [analysed(input), analysed(bare)]
    without.tubes.forEach((tube, i) => expect(tube.headline!.value / withB1.tubes[i]!.headline!.value).toBeCloseTo(1 / scale[i]! ** 2 / (1 / scale[i]! ** 4), 1))
    expect(without.flags.map(flag => flag.id)).toContain('noB1')
    expect(withB1.flags.map(flag => flag.id)).not.toContain('noB1')
  })
})

describe('options of a fit', () => {
  it('profile and bootstrap intervals are the same each time, near Student\'s, and named in the method', () => {
    const plain = analysed(inputOf('SK-02_A1_T2_echoes.csv'))
    for (const [interval, words] of [['profile', 'profile of the sum of squares'], ['bootstrap', 'residual bootstrap']] as const) {
      const a = analysed(inputOf('SK-02_A1_T2_echoes.csv', { options: { interval } }))
      expect(a).toEqual(analysed(inputOf('SK-02_A1_T2_echoes.csv', { options: { interval } })))
      expect(a.method).toContain(words)
      a.tubes.forEach((tube, i) => {
        const [low, high] = tube.headline!.interval!
        const [plainLow, plainHigh] = plain.tubes[i]!.headline!.interval!
        expect((high - low) / (plainHigh - plainLow)).toBeGreaterThan(0.5)
        expect((high - low) / (plainHigh - plainLow)).toBeLessThan(1.6)
        expect(tube.headline!.value).toBe(plain.tubes[i]!.headline!.value)
      })
    }
  })
  it('first echoes are left out of every tube, with the reason, and change nothing else', () => {
    const { tubes } = analysed(inputOf('SK-02_A1_T2_echoes.csv', { options: { skipEchoes: 2 } }))
    for (const tube of tubes) expect(tube.points.filter(point => point.excluded !== null).map(point => point.index)).toEqual([0, 1])
    expect(analysed(inputOf('SK-02_A1_T2_echoes.csv', { conditions: { ...inputOf('SK-02_A1_T2_echoes.csv').conditions, skippedEchoes: 2 } })).tubes[0]!.points[1]!.excluded).toContain('first 2 echoes')
  })
  it('the noise-floor model mends what noise does to late echoes; the background says how much noise there is', () => {
    const name = 'SK-16_A1_T2_echoes.csv'
    const plain = analysed(inputOf(name))
    const measured = analysed(inputOf(name, { modelId: 'multiEchoNoiseFloor' }))
    const fitted = analysed(inputOf(name, { modelId: 'multiEchoNoiseFloor', options: { noiseSigma: 'fitted' } }))
    expect(plain.tubes.at(-1)!.flags.map(flag => flag.id)).toEqual(expect.arrayContaining(['levelsOff', 'weakEcho']))
    expect(measured.tubes.at(-1)!.flags.map(flag => flag.id)).not.toContain('runs')
    expect(measured.tubes[0]!.parameters.map(one => one.name)).not.toContain('sigma_au')
    expect(fitted.tubes.at(-1)!.parameters.find(one => one.name === 'sigma_au')!.value / 22).toBeCloseTo(1, 1)
    for (const { series } of [measured, fitted]) expect(Math.abs(series.headline.value - TRUTH[name]!)).toBeLessThan(3 * series.headline.se!)
  })
  it('a binding isotherm stands beside the line where the protein is known, and says why where it is not', () => {
    const without = analysed(inputOf('SK-02_A1_T2_echoes.csv', { options: { line: 'binding' } }))
    expect(without.flags.map(flag => flag.id)).toContain('noProtein')
    const input = inputOf('SK-02_A1_T2_echoes.csv', { options: { line: 'binding' } })
    const bent = { ...input, conditions: { ...input.conditions, protein_mM: 0.6 } }
    const { series, method } = analysed(bent)
    expect(series.parameters.map(one => one.name)).toEqual(expect.arrayContaining(['free_per_mM_s', 'bound_per_mM_s', 'kd_mM']))
    expect(series.curve!.points).toHaveLength(61)
    expect(method).toContain('binding isotherm')
  })

  it('counts the error of each tube\'s own concentration in the isotherm, by the slope of the curve there', () => {
    const input = inputOf('SK-02_A1_T2_echoes.csv', { options: { line: 'binding' } })
    const known = { ...input, conditions: { ...input.conditions, protein_mM: 0.6 } }
    const gainOf = (concSe_frac: number | null) => {
      const outcome = analysed({ ...known, tubes: known.tubes.map(tube => ({ ...tube, concSe_mM: concSe_frac === null ? null : concSe_frac * tube.conc_mM })) })
      return outcome.series.curve === undefined ? null : outcome.series.statistics.find(one => one.label === 'Isotherm against line')!.value
    }
    expect(gainOf(null)).not.toBe(gainOf(0.2))
    expect(gainOf(0)).toBe(gainOf(null))
  })
})

describe('the reference tube', () => {
  it('is known by its name, fitted, and never on the line', () => {
    const input = inputOf('SK-12_A1_L2.csv')
    const reference = input.tubes.find(tube => tube.role === 'reference')!
    expect(reference.label).toBe('REF')
    const outcome = analysed(input)
    expect(outcome.tubes.find(tube => tube.role === 'reference')!.headline!.value).toBeCloseTo(0.4462, 2)
    expect(outcome.series.points.map(point => point.tubeNo)).not.toContain(reference.tubeNo)
    const gone = analysed({ ...input, tubes: input.tubes.filter(tube => tube !== reference) })
    expect(gone.series.headline).toEqual(outcome.series.headline)
  })
})

describe('of which kind a file is', () => {
  const kinds = Object.values(MEASUREMENTS)
  const guessed = (text: string): string | undefined => guessKind(new TextEncoder().encode(text), kinds)?.kind
  it('is read off its words, for every file of the demonstration', () => {
    for (const file of DEMO_FILES) expect([file.fileName, guessed(demoFileText(file))]).toEqual([file.fileName, file.kind])
    for (const file of DEMO_TITRATIONS) expect([file.fileName, guessed(titrationText(file))]).toEqual([file.fileName, file.kind])
  }, 60_000)
  it('and for every template', () => {
    for (const kind of kinds) for (const { fileName, text } of kind.templates) expect([fileName, guessed(text)]).toEqual([fileName, kind.kind])
  }, 60_000)
  it('a file that says nothing is taken for the first of all, bytes that are no text for none', () => {
    expect(guessed('a,b\n1,2\n2,3\n')).toBe(kinds[0]!.kind)
    expect(guessKind(Uint8Array.of(0x89, 0x50, 0x4E, 0x47, 0, 0, 0, 0), kinds)).toBeNull()
  })
})
