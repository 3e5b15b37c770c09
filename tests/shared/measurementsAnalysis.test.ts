import { describe, expect, it } from 'vitest'
import { findMeasurement, MEASUREMENTS, measurement } from '#shared/measurements'
import { relaxFitted } from '#shared/measurements/relaxFitted'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import type { AnalysisInput, AnalysisOutcome, Conditions, Exclusion, MeasurementKind, SeriesTube } from '#shared/measurements/types'
import { EVIDENCE_QUANTITIES, evidenceQuantity } from '#shared/evidence/quantities'
import { EvidenceDraft } from '#shared/evidence/types'
import { FigureSpec } from '#shared/schemas/figure'
import { canonicalJson } from '#shared/science/canonical'
import { createRandom } from '#shared/science/random'
import { understandTable } from '#shared/measurements/tabular/understand'
import { RECOVERY_FORM } from './measurementsSupport'

const TIMES_s = [0.05, 0.1, 0.2, 0.3, 0.5, 0.7, 1, 1.5, 2.5, 4, 6, 9]
const TRUTH = { r1: 4.2, dia: 0.4 }

interface Made { concs_mM?: number[], noise?: number, seed?: string, signal?: (ti_s: number, t1_s: number) => number, concError?: (index: number) => number, concSe_mM?: number | null }

/** Tubes of S = 1000·(1 − 1.94·exp(−TI/T1)) with R1 = 0.4 + 4.2·c and seeded noise. */
function phantom({ concs_mM = [0, 0.1, 0.25, 0.5, 0.75, 1], noise = 3, seed = 'phantom', signal, concError = () => 0, concSe_mM = null }: Made = {}): SeriesTube[] {
  const random = createRandom(seed)
  const shape = signal ?? ((ti_s: number, t1_s: number) => 1000 * (1 - 1.94 * Math.exp(-ti_s / t1_s)))
  return concs_mM.map((conc_mM, j) => {
    const t1_s = 1 / (TRUTH.dia + TRUTH.r1 * (conc_mM + concError(j)))
    return {
      tubeNo: j + 1, label: conc_mM === 0 ? 'blank' : `${conc_mM} mM`, role: conc_mM === 0 ? 'blank' : 'sample', conc_mM, concSe_mM: conc_mM === 0 ? null : concSe_mM,
      points: { columns: ['ti_s', 'signal_au'], rows: TIMES_s.map(ti_s => [ti_s, shape(ti_s, t1_s) + noise * random.normal()]) },
    }
  })
}

function inputOf(kind: MeasurementKind, tubes: SeriesTube[], conditions: Conditions = {}, exclusions: Exclusion[] = []): AnalysisInput {
  const all = { ...RECOVERY_FORM, ...conditions }
  return { kind: kind.kind, conditions: all, tubes, exclusions, modelId: kind.defaultModel(all), options: {}, seed: 'seed' }
}

function analysed(input: AnalysisInput): Extract<AnalysisOutcome, { ok: true }> {
  const outcome = measurement(input.kind).analyse(input)
  if (!outcome.ok) throw new Error(`${outcome.reason}: ${outcome.message}`)
  return outcome
}

describe('inversion recovery of a phantom', () => {
  it('finds r1 and the diamagnetic rate of signed signals within two standard errors [forward model]', () => {
    const { series, tubes } = analysed(inputOf(relaxT1Ir, phantom()))
    const [r1, dia] = series.parameters
    expect(Math.abs((r1?.value ?? 0) - TRUTH.r1)).toBeLessThan(2 * (r1?.se ?? 0))
    expect(Math.abs((dia?.value ?? 0) - TRUTH.dia)).toBeLessThan(3 * (dia?.se ?? 0))
    expect(tubes.map(tube => tube.headline?.name)).toEqual(Array.from({ length: 6 }, () => 't1_s'))
    expect(tubes.every(tube => tube.statistics?.sigma.includes('pooled over the tubes'))).toBe(true)
  })

  it('gives the same T1 for magnitudes as for signed signals, and shows the signs it restored [polarity]', () => {
    const signed = phantom()
    const magnitude = signed.map(tube => ({ ...tube, points: { ...tube.points, rows: tube.points.rows.map(([ti, s]) => [ti ?? 0, Math.abs(s ?? 0)]) } }))
    const a = analysed(inputOf(relaxT1Ir, signed))
    const b = analysed(inputOf(relaxT1Ir, magnitude, { signalForm: 'magnitude' }))
    expect(b.series.headline.value).toBeCloseTo(a.series.headline.value, 9)
    expect(b.tubes[0]?.points.map(point => point.y)).toEqual(a.tubes[0]?.points.map(point => point.y))
  })

  it('uses the model that the timing calls for, and finds T1 with it [Barral et al. 2010]', () => {
    const tr_s = 10
    const repeat = phantom({ signal: (ti, t1) => 1000 * (1 - 2 * Math.exp(-ti / t1) + Math.exp(-tr_s / t1)) })
    const byRepeat = inputOf(relaxT1Ir, repeat, { timing: 'inversionToInversion', tr_s })
    expect(byRepeat.modelId).toBe('inversionRecoveryTiRepeat')
    expect(Math.abs(analysed(byRepeat).series.headline.value / TRUTH.r1 - 1)).toBeLessThan(0.02)
    const td_s = 1.2
    const delay = phantom({ signal: (ti, t1) => 1000 * (1 - (1 + 1 - Math.exp(-td_s / t1)) * Math.exp(-ti / t1)) })
    const byDelay = inputOf(relaxT1Ir, delay, { timing: 'constantDelay', td_s })
    expect(byDelay.modelId).toBe('inversionRecoveryDelay')
    expect(Math.abs(analysed(byDelay).series.headline.value / TRUTH.r1 - 1)).toBeLessThan(0.02)
  })

  it('adds the common concentration error in quadrature and keeps it out of the line [methods, section 2]', () => {
    const without = analysed(inputOf(relaxT1Ir, phantom(), { concScaleError_frac: 0 })).series
    const with3 = analysed(inputOf(relaxT1Ir, phantom(), { concScaleError_frac: 0.03 })).series
    expect(with3.headline.value).toBe(without.headline.value)
    expect(with3.headline.se ?? 0).toBeCloseTo(Math.hypot(without.headline.se ?? 0, 0.03 * without.headline.value), 9)
    expect(with3.parameters[1]?.se).toBe(without.parameters[1]?.se)
  })

  it('draws York\'s line where tubes have concentration errors of their own [York et al. 2004]', () => {
    const tubes = phantom({ concError: j => [0, 0.004, -0.006, 0.005, -0.008, 0.01][j] ?? 0, concSe_mM: 0.008 })
    const { series, method } = analysed(inputOf(relaxT1Ir, tubes, { concScaleError_frac: 0 }))
    expect(method).toContain('errors in rate and concentration')
    expect(Math.abs(series.headline.value - TRUTH.r1)).toBeLessThan(3 * (series.headline.se ?? 0))
  })
})

describe('leaving out', () => {
  it('a point left out keeps its place and changes only its own tube [exclusions]', () => {
    const tubes = phantom()
    const spoiled = tubes.map(tube => tube.tubeNo === 4 ? { ...tube, points: { ...tube.points, rows: tube.points.rows.map((row, i) => i === 5 ? [row[0] ?? 0, 4000] : row) } } : tube)
    const without = analysed(inputOf(relaxT1Ir, spoiled, {}, [{ tubeNo: 4, pointIndex: 5, reason: 'spike in the raw data' }]))
    const tube = without.tubes[3]
    expect(tube?.points[5]).toMatchObject({ y: 4000, excluded: 'spike in the raw data', residual: expect.any(Number) })
    expect(Math.abs(without.series.headline.value - TRUTH.r1)).toBeLessThan(3 * (without.series.headline.se ?? 0))
    expect(analysed(inputOf(relaxT1Ir, spoiled)).tubes[3]?.flags.map(flag => flag.id)).toContain('outlier')
  })

  it('a tube left out is fitted and shown at its place, and the line is as if it were not there', () => {
    const tubes = phantom()
    const left = analysed(inputOf(relaxT1Ir, tubes, {}, [{ tubeNo: 6, pointIndex: null, reason: 'air bubble' }]))
    const gone = analysed(inputOf(relaxT1Ir, tubes.slice(0, 5)))
    expect(left.series.headline).toEqual(gone.series.headline)
    expect(left.series.points[5]).toMatchObject({ tubeNo: 6, excluded: 'air bubble', studentised: null })
    expect(left.tubes[5]?.headline?.value).toBeGreaterThan(0)
    expect(left.method).toContain('Left out: 1 tube (air bubble)')
  })

  it('of something that is not there is a fault, not a wish', () => {
    expect(() => relaxT1Ir.analyse(inputOf(relaxT1Ir, phantom(), {}, [{ tubeNo: 9, pointIndex: null, reason: 'x' }]))).toThrow('no tube 9')
    expect(() => relaxT1Ir.analyse(inputOf(relaxT1Ir, phantom(), {}, [{ tubeNo: 1, pointIndex: 99, reason: 'x' }]))).toThrow('no point 99')
  })
})

describe('refusals are values, with the tubes as far as they got', () => {
  const onlyTwo = [3, 4, 5, 6].map(tubeNo => ({ tubeNo, pointIndex: null, reason: 'test' }))
  it.each([
    ['two tubes left', phantom(), onlyTwo, 'tooFewTubes', /2 tubes are left/],
    ['equal concentrations', phantom({ concs_mM: [0.5, 0.5, 0.5, 0.5] }), [], 'equalConcentrations', /Every tube holds 0\.5 mM/],
  ])('%s', (_, tubes, exclusions, reason, message) => {
    const outcome = relaxT1Ir.analyse(inputOf(relaxT1Ir, tubes, {}, exclusions))
    expect(outcome).toMatchObject({ ok: false, reason })
    expect(outcome.ok ? '' : outcome.message).toMatch(message)
    expect(outcome.tubes).toHaveLength(tubes.length)
    expect(relaxT1Ir.seriesFigure(outcome)).toBeNull()
  })

  it('a tube that cannot be fitted says why and does not take the others down', () => {
    const tubes = phantom().map(tube => tube.tubeNo === 2 ? { ...tube, points: { ...tube.points, rows: tube.points.rows.slice(0, 2) } } : tube)
    const { tubes: results, series } = analysed(inputOf(relaxT1Ir, tubes))
    expect(results[1]).toMatchObject({ headline: null, refusal: { reason: 'tooFewPoints' } })
    expect(series.points.map(point => point.tubeNo)).toEqual([1, 3, 4, 5, 6])
  })
})

describe('tables of fitted values', () => {
  const made = (columns: string[], of: (rate: number) => (number | null)[], repeats = 1): SeriesTube[] => [0, 0.2, 0.5, 1].map((conc_mM, j) => ({
    tubeNo: j + 1, label: `t${j + 1}`, role: conc_mM === 0 ? 'blank' : 'sample', conc_mM, concSe_mM: null,
    points: { columns, rows: Array.from({ length: repeats }, (_, k) => of((TRUTH.dia + TRUTH.r1 * conc_mM) * (1 + 0.002 * (k - (repeats - 1) / 2)))) },
  }))

  it('T and R of the same tubes give the same relaxivity [closed form]', () => {
    const fromT = analysed(inputOf(relaxFitted, made(['t_s', 'tSe_s'], rate => [1 / rate, 0.01 / rate]), { quantity: 'T1' }))
    const fromR = analysed(inputOf(relaxFitted, made(['rate_per_s', 'rateSe_per_s'], rate => [rate, 0.01 * rate]), { quantity: 'T1' }))
    expect(fromT.series.headline.value).toBeCloseTo(TRUTH.r1, 10)
    expect(fromR.series.headline.value).toBeCloseTo(fromT.series.headline.value, 10)
    expect(fromR.series.headline.se ?? 0).toBeCloseTo(fromT.series.headline.se ?? 0, 10)
  })

  it('without errors the line is not weighted, and says so', () => {
    const { flags, series } = analysed(inputOf(relaxFitted, made(['rate_per_s'], rate => [rate]), { quantity: 'T2' }))
    expect(series.headline.name).toBe('r2_per_mM_s')
    expect(flags.map(flag => flag.id)).toContain('unweighted')
  })

  it('repeats of a tube become their mean, with the error of their scatter [textbook]', () => {
    const { tubes } = analysed(inputOf(relaxFitted, made(['rate_per_s'], rate => [rate], 3), { quantity: 'T1' }))
    const rate = tubes[1]?.parameters.find(parameter => parameter.name === 'rate1_per_s')
    expect(rate?.value).toBeCloseTo(1.24, 12)
    expect(rate?.se).toBeCloseTo(1.24 * 0.002 / Math.sqrt(3), 12)
    expect(tubes[1]?.points).toHaveLength(3)
  })
})

describe('what comes out', () => {
  it('is the same to the last bit for the same input [determinism]', () => {
    const input = inputOf(relaxT1Ir, phantom(), { signalForm: 'signed' })
    expect(canonicalJson(relaxT1Ir.analyse(input))).toBe(canonicalJson(relaxT1Ir.analyse(JSON.parse(JSON.stringify(input)))))
  })

  it('is evidence of registered meaning, with its conditions and the error of its stock', () => {
    const input = inputOf(relaxT1Ir, phantom(), { stock: 'Stock 3', preparations: 2 })
    const [evidence, ...rest] = relaxT1Ir.evidence(analysed(input), input)
    expect(rest).toEqual([])
    expect(EvidenceDraft.parse(evidence)).toEqual(evidence)
    expect(evidence).toMatchObject({
      quantity: 'r1_per_mM_s', conditions: { b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'plasma', mediumClass: 'plasma' },
      covarianceGroup: { id: 'stock:stock 3', scaleFraction: 0.015 }, detail: { nTubes: 6, nTubesLeftOut: 0, preparations: 2, nPoints: 72, hasBlank: true, lowestConc_mM: 0, highestConc_mM: 1 },
    })
    const { fitSe } = evidence?.detail ?? {}
    expect(Math.hypot(Number(fitSe), 0.015 * (evidence?.value.value ?? 0))).toBeCloseTo(evidence?.value.se ?? 0, 9)
    expect(evidenceQuantity(evidence?.quantity ?? '')).toMatchObject({ base: 'r', sub: '1', better: 'higher' })
    expect(() => evidenceQuantity('toString')).toThrow('toString')
    expect(Object.entries(EVIDENCE_QUANTITIES).every(([id, quantity]) => quantity.id === id)).toBe(true)
  })

  it('is drawn as figures that fit the schema, with left-out points as crosses', () => {
    const outcome = analysed(inputOf(relaxT1Ir, phantom(), {}, [{ tubeNo: 2, pointIndex: 0, reason: 'test' }, { tubeNo: 5, pointIndex: null, reason: 'test' }]))
    const series = relaxT1Ir.seriesFigure(outcome)
    expect(FigureSpec.parse(series)).toEqual(series)
    expect(series?.layers.find(layer => layer.type === 'cross')).toMatchObject({ points: [{ id: '5' }] })
    for (const tube of outcome.tubes) expect(FigureSpec.safeParse(relaxT1Ir.tubeFigure(tube)).error).toBeUndefined()
    expect(relaxT1Ir.tubeFigure(outcome.tubes[1]!).layers.some(layer => layer.type === 'cross')).toBe(true)
  })

  it('says how it was measured in a sentence that can be pasted', () => {
    const { method } = analysed(inputOf(relaxT1Ir, phantom()))
    expect(method).toMatch(/^T1 of 6 tubes \(1 without agent\), 0 to 1 mM of metal, was measured by inversion recovery at 3 T, 37\.0 °C, pH 7\.4 in plasma \(12 inversion times from 0\.05 to 9 s; signed signals\)/)
    expect(method).toContain('weighted with 1/SE²; a common concentration error of 1.5 % was added in quadrature')
    expect(relaxT1Ir.describe(RECOVERY_FORM)).toBe('r_1, 3 T, 37 °C, plasma')
  })
})

describe('the registry', () => {
  it('finds kinds by id and nothing else', () => {
    expect(Object.keys(MEASUREMENTS)).toEqual(['relax.t1.ir', 'relax.t1.sr', 'relax.t1.ll', 'relax.t1.vfa', 'relax.t2.echo', 'relax.fitted', 'kinetics.course', 'kinetics.rates', 'kinetics.zincPhosphate', 'thermo.titration', 'exchange.zspectrum'])
    expect(findMeasurement(MEASUREMENTS, 'toString')).toBeNull()
    expect(() => measurement('relax.nothing')).toThrow('relax.nothing')
  })

  it.each(Object.values(MEASUREMENTS).filter(kind => kind.kind.startsWith('relax.')).flatMap(kind => kind.templates.map(template => ({ kind, ...template }))))('$fileName is understood by its own kind, but for what is still to be filled in', ({ kind, text, fileName }) => {
    const { tubes, problems, conditions } = understandTable({ text: text.replaceAll('\r\n', '\n'), kind, draft: { complexCode: 'SK-07', lot: 'B1' } })
    expect(fileName).toMatch(/^[a-z0-9-]+\.csv$/)
    expect(tubes.map(tube => tube.conc_mM)).toEqual([0, 0.1, 0.25, 0.5, 1])
    expect(conditions).toMatchObject({ instrument: expect.any(String), temperature_K: 310.15, concBasis: 'icp', concScaleError_frac: 0.015 })
    expect(new Set(problems.filter(problem => problem.severity === 'blocks').map(problem => problem.id))).toEqual(new Set(['noPoints']))
  })
})
