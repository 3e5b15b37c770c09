import { describe, expect, it } from 'vitest'
import { kineticsZincPhosphate as kind } from '#shared/measurements/kinetics/zinc'
import { zincPhosphate as record } from '#shared/evidence/records/zincPhosphate'
import { blocking, done, evidenceOf, inputFrom, readAs } from '../support/kineticsTables'

const LINES = ['Field: 20 MHz', 'Temperature: 37.0 °C', 'pH: 7.0', 'Complex: 2.5 mM', 'Zinc: 2.5 mM', 'Phosphate: 67 mM', 'R1 of the buffer: 0.4 1/s', 'Measured on: the complex itself', 'Buffer: 26 mM KH2PO4 and 41 mM Na2HPO4']
const TIMES_h = [0, 0.5, 1, 2, 3, 4, 5, 8, 12, 24, 48, 72, 90]
/** R1 of a run whose ratio falls by one exponential through 0.80 at a given time and its end at 72 h: a stand-in for a published course, through its two published numbers. */
function runThrough(ratio72: number, minutesTo080: number | null): number[] {
  const ratio = (rate_per_h: number, t: number): number => 1 - (1 - ratio72) * (1 - Math.exp(-rate_per_h * t)) / (1 - Math.exp(-rate_per_h * 72))
  let [low, high] = [1e-4, 50]
  for (let i = 0; i < 80 && minutesTo080 !== null; i++) {
    const middle = Math.sqrt(low * high)
    if (ratio(middle, minutesTo080 / 60) > 0.8) low = middle
    else high = middle
  }
  return TIMES_h.map(t => Number((0.4 + 9.6 * ratio(minutesTo080 === null ? 0.05 : low, t)).toFixed(4)))
}
const wide = (runs: readonly number[][], lines: readonly string[] = LINES): string[] => [...lines, '', ['Time (h)', ...runs.map((_, i) => `run ${i + 1}`)].join(','), ...TIMES_h.map((time, i) => [time, ...runs.map(run => run[i]!)].join(','))]

// ratio at 72 h and time to 0.80: Laurent et al., Contrast Media Mol. Imaging 1, 128 (2006), and Port et al., BioMetals 21, 469 (2008), from memory
const PUBLISHED = [['[Gd(DTPA)]²⁻', 0.49, 263], ['[Gd(DTPA-BMA)]', 0.09, 58], ['[Gd(DTPA-BMEA)]', 0.10, 60], ['[Gd(BOPTA)]²⁻', 0.53, 600]] as const

describe('zinc and phosphate from a table [Laurent et al., Invest. Radiol. 36, 115 (2001), protocol from memory]', () => {
  it.each(PUBLISHED)('%s: ratio %d and %d min', (_, ratio72, minutes) => {
    const evidence = evidenceOf(kind, inputFrom(kind, wide([runThrough(ratio72, minutes)])))
    expect(evidence.zincPhosphateRatio!.value.value).toBeCloseTo(ratio72, 2)
    // read between points of the table, a straight line of up to an hour
    expect(evidence.zincPhosphateTime080_s!.value.value / 60 / minutes).toBeCloseTo(1, 1)
    expect(evidence.zincPhosphateTime080_s!.value.kind).toBe('=')
  })

  it('a ring that stays above 0.80: not reached is "at least" the last time, never extrapolated [published > 5000 min]', () => {
    const input = inputFrom(kind, wide([runThrough(0.99, null)]))
    const evidence = evidenceOf(kind, input)
    expect(evidence.zincPhosphateRatio!.value.value).toBeCloseTo(0.99, 2)
    expect(evidence.zincPhosphateTime080_s!.value).toMatchObject({ value: 90 * 3600, kind: '>', se: null, interval: null })
    const outcome = done(kind, input)
    expect(outcome.series.statistics.find(one => one.label === 'Time to 0.80')!.text).toContain('not reached')
    expect(outcome.flags).toEqual([])
  })

  it('says the same as the typed record of the same numbers: quantities, conditions, detail', () => {
    const number = (value: number, unit: string) => ({ type: 'number' as const, value, unit })
    const typed = record.emits({
      ratioAt72h: { type: 'quantity', kind: '=', value: 0.49, se: null, unit: '' }, measuredOn: { type: 'choice', choice: 'itself' }, b0_T: number(20, 'MHz'), rate1Dia_per_s: number(0.4, 's^-1'), complex_mM: number(2.5, 'mM'),
      zinc_mM: number(2.5, 'mM'), phosphate_mM: number(67, 'mM'), pH: number(7, ''), temperature_K: number(37, '°C'), buffer: { type: 'text', text: '26 mM KH2PO4 and 41 mM Na2HPO4' },
    }, { metal: 'Gd', ligandProtonation: null })[0]!
    const own = evidenceOf(kind, inputFrom(kind, wide([runThrough(0.49, 263)]))).zincPhosphateRatio!
    expect(own.conditions).toEqual(typed.conditions)
    expect(own.detail).toMatchObject(typed.detail)
    expect(own.value.unit).toBe(typed.value.unit)
  })

  it('reads R1, T1 and R1p to the same ratio, wide and long', () => {
    const run = runThrough(0.49, 263)
    const long = (head: string, of: (rate: number) => number, se: (rate: number) => number) => [...LINES, '', `run,time (min),${head},SE`, ...TIMES_h.map((time, i) => `a,${time * 60},${of(run[i]!)},${se(run[i]!)}`)]
    const [asR1, asT1, asR1p] = [long('R1 (1/s)', r => r, () => 0.05), long('T1 (ms)', r => 1000 / r, r => 50 / r ** 2), long('R1p (1/s)', r => r - 0.4, () => 0.05)].map(lines => evidenceOf(kind, inputFrom(kind, lines)).zincPhosphateRatio!.value)
    for (const one of [asT1, asR1p]) {
      expect(one!.value).toBeCloseTo(asR1!.value, 8)
      expect(one!.se).toBeCloseTo(asR1!.se!, 8)
    }
    expect(asR1!.value).toBeCloseTo(evidenceOf(kind, inputFrom(kind, wide([run]))).zincPhosphateRatio!.value.value, 12)
    // σ of a ratio a/b with equal errors 0.05 of 4.704/9.6
    expect(asR1!.se).toBeCloseTo(0.05 * Math.hypot(1, asR1!.value) / 9.6, 4)
  })

  it('takes the mean of runs with the error of their scatter, and one run that never gets there makes the time a bound', () => {
    const runs = [runThrough(0.78, 2400), runThrough(0.79, 2700), runThrough(0.83, null)]
    const { zincPhosphateRatio: ratio, zincPhosphateTime080_s: time } = evidenceOf(kind, inputFrom(kind, wide(runs)))
    expect(ratio!.value.value).toBeCloseTo(0.8, 1)
    expect(ratio!.value.se).toBeGreaterThan(0.01)
    expect(time!.value.kind).toBe('>')
    expect(time!.value.value / 60).toBeLessThan(2700)
  })

  it('flags what departs from the protocol, and a course that ends before 72 h', () => {
    const other = LINES.map(line => line.replace('37.0 °C', '25.0 °C').replace('Zinc: 2.5', 'Zinc: 1'))
    const lines = wide([runThrough(0.49, 263)], other).slice(0, -3)
    expect(readAs(kind, lines).problems.map(problem => problem.id)).toContain('shortCourse')
    const outcome = done(kind, inputFrom(kind, lines))
    expect(outcome.flags.map(flag => flag.id)).toEqual(['shortCourse', 'otherProtocol'])
    expect(outcome.flags[1]!.sentence).toContain('zinc 1 mM, not 2.5 mM; temperature 25 °C, not 37 °C')
    expect(outcome.series.headline).toMatchObject({ name: 'zincPhosphateTime080_s', kind: '=' })
  })

  it('refuses an R1p that is too small, and a course without its start', () => {
    const weak = [runThrough(0.49, 263).map(rate => Number((0.4 + (rate - 0.4) / 100).toFixed(5)))]
    expect(kind.analyse(inputFrom(kind, wide(weak)))).toMatchObject({ ok: false, reason: 'smallRate', accepted: expect.stringContaining('analogue') })
    const late = wide([runThrough(0.49, 263)]).filter(line => !line.startsWith('0,'))
    expect(readAs(kind, late).problems.map(problem => problem.id)).toContain('noStart')
    expect(kind.analyse(inputFrom(kind, late))).toMatchObject({ ok: false, reason: 'noStart' })
  })

  it('asks for R1 of the buffer, zinc, phosphate and which complex was measured', () => {
    const problems = readAs(kind, wide([runThrough(0.49, 263)], LINES.slice(0, 4))).problems.filter(problem => problem.severity === 'blocks').map(problem => problem.field)
    expect(problems).toEqual(expect.arrayContaining(['conditions.zinc_mM', 'conditions.phosphate_mM', 'conditions.rate1Dia_per_s', 'conditions.measuredOn']))
  })

  it.each(kind.templates.map(one => [one.fileName, one.text] as const))('%s is understood, but for what is still to be filled in', (_, text) => {
    const understood = readAs(kind, [text.replaceAll('\r\n', '\n')])
    expect([...new Set(blocking(understood))]).toEqual(['noPoints'])
    expect(understood.tubes.map(tube => [tube.label, tube.conc_mM])).toEqual([['run 1', 2.5], ['run 2', 2.5], ['run 3', 2.5]])
    expect(understood.conditions).toMatchObject({ rate1Dia_per_s: 0.38, zinc_mM: 2.5, phosphate_mM: 67, measuredOn: 'itself' })
  })

  it('draws the ratio with 0.80 and 72 h', () => {
    const { tubes } = done(kind, inputFrom(kind, wide([runThrough(0.49, 263)])))
    const figure = kind.tubeFigure(tubes[0]!)
    expect(figure.layers.filter(layer => layer.type === 'rule').map(layer => layer.at)).toEqual([0.8, 72])
    expect(figure.x).toMatchObject({ unit: 'h' })
  })
})
