import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { fitSeries } from '../../../shared/science/exchange/fitSeries'
import type { PoolSystem } from '../../../shared/science/exchange/poolSystem'
import type { Quantity, SeriesFitDone, SeriesModel, SeriesPool, SeriesSpectrum, SeriesTube } from '../../../shared/science/exchange/seriesTypes'
import { cwSpectrum } from '../../../shared/science/exchange/spectrum'
import { createRandom, type RandomSource } from '../../../shared/science/random'

const isFull = process.env.LANTHORN_TEST === 'full'
const scipy = JSON.parse(readFileSync(new URL('../../../fixtures/reference/exchange/fit.json', import.meta.url), 'utf8')) as {
  sigma: number, offsets_ppm: number[], tubes: { conc_mM: number, rate1_per_s: number }[], spectra: { tube: number, b1_uT: number, duration_s: number, z: number[] }[], true: number[], best: number[], se: number[], sumOfSquares: number
}

const held = (value: number | readonly number[], se?: number): Quantity => ({ kind: 'held', value, se })
const fitted: Quantity = { kind: 'fitted' }
const pool = (label: string, rate2_per_s: number, more: Partial<SeriesPool> = {}): SeriesPool =>
  ({ label, shift_ppm: fitted, exchange_per_s: fitted, rate1_per_s: held(1), rate2_per_s: held(rate2_per_s), ratio_per_mM: fitted, ...more })
const done = (outcome: ReturnType<typeof fitSeries>): SeriesFitDone => {
  if (!outcome.ok) throw new Error(outcome.message)
  return outcome
}
const parameter = (fit: SeriesFitDone, of: string, name: string, tube: number | null = null) => fit.parameters.find(one => one.of === of && one.name === name && one.tube === tube)!

const scipyModel: SeriesModel = { field_T: 9.4, water: { rate1_per_s: held(scipy.tubes.map(one => one.rate1_per_s)), rate2_per_s: fitted, shift_ppm: held(0) }, pools: [pool('a', 60), pool('b', 60)] }
const scipySpectra = scipy.spectra.map((one): SeriesSpectrum => ({ ...one, offsets_ppm: scipy.offsets_ppm }))

describe('the global fit', () => {
  it('ends where SciPy ends, with its standard errors, from starts of its own, for 2 pools, 2 tubes, 3 B1 and 2 saturation times [SciPy least_squares over expm]', () => {
    const fit = done(fitSeries(scipyModel, scipy.tubes, scipySpectra, { leaveOutNearWater_ppm: 0 }))
    expect(fit.leftOutNearWater).toBe(0)
    expect(fit.converged).toBe(true)
    expect(fit.starts.agree).toBeGreaterThan(0)
    const theirs = scipy.best.map((x, j) => j === 1 || j === 4 ? x : Math.exp(x))
    const theirSe = scipy.se.map((se, j) => j === 1 || j === 4 ? se : se * theirs[j]!)
    fit.parameters.forEach((one, j) => {
      expect(Math.abs(one.value - theirs[j]!), `${one.of} ${one.name}`).toBeLessThan(1e-4 * theirSe[j]!)
      expect(one.se! / theirSe[j]!).toBeCloseTo(1, 4)
    })
    expect(fit.rss / scipy.sumOfSquares).toBeCloseTo(1, 8)
    expect(fit.sigma).toBeCloseTo(scipy.sigma, 3)
  })
  it('scales its errors by max(1, χ²red) with σ known', () => {
    const estimated = done(fitSeries(scipyModel, scipy.tubes, scipySpectra))
    const wide = done(fitSeries(scipyModel, scipy.tubes, scipySpectra.map(one => ({ ...one, sigma: 0.008 }))))
    const narrow = done(fitSeries(scipyModel, scipy.tubes, scipySpectra.map(one => ({ ...one, sigma: 0.002 }))))
    expect(wide.reducedChi2!).toBeLessThan(1)
    expect(wide.intervalDof).toBeNull()
    expect(wide.parameters[2]!.se! / estimated.parameters[2]!.se!).toBeCloseTo(0.008 / estimated.sigma!, 4)
    expect(narrow.parameters[2]!.se! / estimated.parameters[2]!.se!).toBeCloseTo(1, 4)
  })
  it('carries the error of B1 and of R1 of water as refits with both moved do [refit]', () => {
    const tubes = scipy.tubes.map(one => ({ ...one, b1Se_frac: 0.05 }))
    const model = { ...scipyModel, water: { ...scipyModel.water, rate1_per_s: held(scipy.tubes.map(one => one.rate1_per_s), 0.02) } }
    const fit = done(fitSeries(model, tubes, scipySpectra))
    const half = (refit: (sign: number) => ReturnType<typeof fitSeries>) => {
      const [above, below] = [done(refit(1)), done(refit(-1))]
      return above.parameters.map((one, j) => 0.5 * (one.value - below.parameters[j]!.value))
    }
    const b1Moved = half(sign => fitSeries(scipyModel, scipy.tubes.map(one => ({ ...one, b1Scale: 1 + 0.05 * sign })), scipySpectra))
    const r1Moved = half(sign => fitSeries({ ...scipyModel, water: { ...scipyModel.water, rate1_per_s: held(scipy.tubes.map(one => one.rate1_per_s + 0.02 * sign)) } }, scipy.tubes, scipySpectra))
    expect(fit.carried.map(one => one.source)).toEqual(['B1', 'rate1_per_s of water'])
    fit.parameters.forEach((one, j) => {
      // First order in what moves: the curvature of the spectra over 5 % of B1 takes up to a sixth of the change.
      ;[b1Moved, r1Moved].forEach((moved, c) => expect(Math.abs(fit.carried[c]!.change[j]! - moved[j]!), `${one.of} ${one.name} ${c}`).toBeLessThan(0.15 * Math.abs(moved[j]!) + 0.15 * one.scatterSe!))
      expect(one.se!).toBeCloseTo(Math.hypot(one.scatterSe!, one.carriedSe!), 12)
      expect(one.carriedSe!).toBeCloseTo(Math.hypot(...fit.carried.map(c => c.change[j]!)), 12)
    })
    const apart = done(fitSeries(model, tubes, scipySpectra, { b1ErrorIsCommon: false }))
    expect(apart.carried.map(one => one.source)).toEqual(['B1 of tube 1', 'B1 of tube 2', 'rate1_per_s of water'])
  })
  it('gives back what made the spectra, with a rate a tube and a blank among the tubes [closed loop]', () => {
    const rates = [400, 1600]
    const tubes: SeriesTube[] = [{ conc_mM: 0 }, { conc_mM: 15 }, { conc_mM: 15 }]
    const systemOf = (tube: number): PoolSystem => ({
      field_T: 7, waterShift_ppm: 0.02, water: { rate1_per_s: 0.5, rate2_per_s: 14 },
      solutes: [{ shift_ppm: 9, rate1_per_s: 1, rate2_per_s: 80, exchange_per_s: rates[tube - 1] ?? 1, ratio: 3e-5 * tubes[tube]!.conc_mM }],
    })
    const offsets = Array.from({ length: 41 }, (_, i) => -14 + 0.7 * i)
    const spectra = tubes.flatMap((_, tube) => [2, 6].map((b1_uT): SeriesSpectrum => ({ tube, b1_uT, duration_s: 2, initial_frac: 0.9, offsets_ppm: offsets, z: Array.from(cwSpectrum(systemOf(tube), { b1_uT, duration_s: 2, initial_frac: 0.9 }, offsets)) })))
    const model: SeriesModel = {
      field_T: 7, water: { rate1_per_s: held(0.5), rate2_per_s: fitted, shift_ppm: fitted },
      pools: [pool('agent', 80, { exchange_per_s: { kind: 'fitted', perTube: true, start: 700 } })],
    }
    const fit = done(fitSeries(model, tubes, spectra, { leaveOutNearWater_ppm: 0.5 }))
    expect(parameter(fit, 'agent', 'exchange_per_s', 1).value).toBeCloseTo(400, 3)
    expect(parameter(fit, 'agent', 'exchange_per_s', 2).value).toBeCloseTo(1600, 2)
    expect(parameter(fit, 'agent', 'ratio_per_mM').value / 3e-5).toBeCloseTo(1, 6)
    expect(parameter(fit, 'water', 'shift_ppm').value).toBeCloseTo(0.02, 8)
    expect(fit.leftOutNearWater).toBe(6)
    // The blank has no exchange rate.
    expect(fit.parameters.filter(one => one.name === 'exchange_per_s').map(one => one.tube)).toEqual([1, 2])
    expect(fit.noInterval).toBeNull()
  })
  it('leaves out the points where water still nutates, and says how many [sin²θ·e^(−R2·t) of the built-up spectra]', () => {
    const short = scipySpectra.map(one => ({ ...one, duration_s: 0.1, z: Array.from(cwSpectrum({ field_T: 9.4, water: { rate1_per_s: 0.5, rate2_per_s: 6 }, solutes: [{ shift_ppm: 5, rate1_per_s: 1, rate2_per_s: 60, exchange_per_s: 900, ratio: 4e-4 }] }, { b1_uT: one.b1_uT, duration_s: 0.1 }, one.offsets_ppm)) }))
    const model = { ...scipyModel, pools: [pool('a', 60)] }
    const [shortFit, longFit] = [done(fitSeries(model, scipy.tubes, short)), done(fitSeries(scipyModel, scipy.tubes, scipySpectra))]
    expect(shortFit.leftOutNearWater).toBeGreaterThan(longFit.leftOutNearWater)
    expect(longFit.leftOutNearWater).toBeGreaterThan(0)
    expect(longFit.residuals.flat().filter(e => e === null).length).toBe(longFit.leftOutNearWater)
  })
  it('does not move with the order of the spectra by a thousandth of its error, and gives the same bits twice', () => {
    const once = done(fitSeries(scipyModel, scipy.tubes, scipySpectra))
    expect(done(fitSeries(scipyModel, scipy.tubes, scipySpectra))).toEqual(once)
    const turned = done(fitSeries(scipyModel, scipy.tubes, scipySpectra.slice().reverse()))
    turned.parameters.forEach((one, j) => expect(Math.abs(one.value - once.parameters[j]!.value)).toBeLessThan(1e-3 * one.se!))
  })
})

describe('coverage of the 95 % interval of the exchange rate', () => {
  const OFFSETS = Array.from({ length: 23 }, (_, i) => -11 + i)
  const K = 1200
  const truth: PoolSystem = { field_T: 9.4, water: { rate1_per_s: 0.5, rate2_per_s: 3 }, solutes: [{ shift_ppm: 6, rate1_per_s: 1, rate2_per_s: 70, exchange_per_s: K, ratio: 6e-4 }] }
  const PLAN = [[2, 1.5], [2, 4], [5, 1.5], [5, 4], [10, 4]] as const
  const clean = (scale: number) => PLAN.map(([b1_uT, duration_s]) => cwSpectrum(truth, { b1_uT: b1_uT * scale, duration_s }, OFFSETS))
  const tries = isFull ? 2000 : 150

  function inside(random: RandomSource, b1Se_frac: number, sigma: number): number {
    const model: SeriesModel = { field_T: 9.4, water: { rate1_per_s: held(0.5), rate2_per_s: fitted, shift_ppm: held(0) }, pools: [pool('agent', 70)] }
    let count = 0
    for (let turn = 0; turn < tries; turn++) {
      const spectra = clean(1 + b1Se_frac * random.normal()).map((z, s): SeriesSpectrum => ({ tube: 0, b1_uT: PLAN[s]![0], duration_s: PLAN[s]![1], offsets_ppm: OFFSETS, z: Array.from(z, x => x + sigma * random.normal()) }))
      const fit = done(fitSeries(model, [{ conc_mM: 20, b1Se_frac }], spectra))
      const { interval } = parameter(fit, 'agent', 'exchange_per_s')
      if (interval && interval[0] <= K && K <= interval[1]) count++
    }
    return count
  }
  /** In the full run 94 to 96 %, as asked; in the quick one four standard deviations of a proportion. */
  const margin = isFull ? 0.01 : 4 * Math.sqrt(0.95 * 0.05 / tries)

  it('with noise of 0.5 points, σ unknown [simulation]', () => {
    const share = inside(createRandom('coverage exchange'), 0, 0.005) / tries
    expect(Math.abs(share - 0.95), `${share}`).toBeLessThan(margin)
  }, 300_000)
  it.skipIf(!isFull)('of the first of two pools beside water [simulation]', () => {
    const both = { ...truth, solutes: [...truth.solutes, { shift_ppm: -4, rate1_per_s: 1, rate2_per_s: 70, exchange_per_s: 400, ratio: 8e-4 }] }
    const random = createRandom('three')
    const model: SeriesModel = { field_T: 9.4, water: { rate1_per_s: held(0.5), rate2_per_s: fitted, shift_ppm: held(0) }, pools: [pool('a', 70), pool('b', 70)] }
    let count = 0
    for (let turn = 0; turn < tries; turn++) {
      const spectra = PLAN.map(([b1_uT, duration_s]): SeriesSpectrum => ({ tube: 0, b1_uT, duration_s, offsets_ppm: OFFSETS, z: Array.from(cwSpectrum(both, { b1_uT, duration_s }, OFFSETS), x => x + 0.005 * random.normal()) }))
      const { interval } = parameter(done(fitSeries(model, [{ conc_mM: 20 }], spectra)), 'a', 'exchange_per_s')
      if (interval && interval[0] <= K && K <= interval[1]) count++
    }
    expect(Math.abs(count / tries - 0.95), `${count / tries}`).toBeLessThan(margin)
  }, 600_000)
  it('with a B1 that is off by 2 % as stated [simulation]', () => {
    const share = inside(createRandom('coverage exchange b1'), 0.02, 0.005) / tries
    expect(Math.abs(share - 0.95), `${share}`).toBeLessThan(margin)
  }, 300_000)
})

describe('flags of the global fit', () => {
  const pools: PoolSystem['solutes'] = [{ shift_ppm: 8, rate1_per_s: 1, rate2_per_s: 60, exchange_per_s: 500, ratio: 8e-4 }]
  const system: PoolSystem = { field_T: 9.4, water: { rate1_per_s: 0.5, rate2_per_s: 10 }, solutes: pools }
  const flagsOf = (offsets_ppm: number[], b1s: number[], of = system) => {
    const spectra = b1s.map((b1_uT): SeriesSpectrum => ({ tube: 0, b1_uT, duration_s: 3, offsets_ppm, z: Array.from(cwSpectrum(of, { b1_uT, duration_s: 3 }, offsets_ppm)) }))
    const model: SeriesModel = { field_T: 9.4, water: { rate1_per_s: held(0.5), rate2_per_s: fitted, shift_ppm: held(0) }, pools: [pool('a', 60, { shift_ppm: { kind: 'fitted', start: 8, min: 7, max: 9 } })] }
    return done(fitSeries(model, [{ conc_mM: 20 }], spectra)).flags.filter(one => one.of !== null).map(one => one.id)
  }
  const range = (from: number, to: number, step: number) => Array.from({ length: Math.round((to - from) / step) + 1 }, (_, i) => from + step * i)
  it('stay away where the spectra hold what the pool needs', () => {
    expect(flagsOf(range(-11, 11, 0.25), [1, 3, 6])).toEqual([])
  })
  it('rise where no spectrum brackets the pool', () => {
    expect(flagsOf(range(-11, 6, 0.25), [1, 3, 6])).toEqual(['outsideOffsets'])
  })
  it('rise where the offsets are farther apart than a third of the width', () => {
    expect(flagsOf(range(-12, 12, 1.5), [1, 2])).toEqual(['coarseOffsets'])
  })
  it('rise where no B1 reaches half a saturation', () => {
    const fast = { ...system, solutes: [{ ...pools[0]!, exchange_per_s: 4000, ratio: 3e-4 }] }
    expect(flagsOf(range(-14, 14, 0.25), [1, 3, 6], fast)).toEqual(['b1BelowExchange'])
    expect(flagsOf(range(-14, 14, 0.25), [6, 20], fast)).toEqual([])
  })
})

describe('what cannot be fitted is refused with the place', () => {
  const tubes = scipy.tubes
  const first = scipySpectra[0]!
  const changed = (change: Partial<SeriesSpectrum>) => [{ ...first, ...change }, ...scipySpectra.slice(1)]
  it.each([
    ['noSpectra', scipyModel, tubes, []],
    ['unusedTube', scipyModel, tubes, scipySpectra.filter(one => one.tube === 0)],
    ['badTube', scipyModel, tubes, changed({ tube: 7 })],
    ['lengthMismatch', scipyModel, tubes, changed({ z: [1] })],
    ['noB1', scipyModel, tubes, changed({ b1_uT: 0 })],
    ['badBlock', scipyModel, tubes, changed({ duration_s: -1 })],
    ['notFinite', scipyModel, tubes, changed({ z: first.z.map((z, i) => i === 3 ? NaN : z) })],
    ['badSigma', scipyModel, tubes, changed({ sigma: 0.01 })],
    ['badSigma', scipyModel, tubes, scipySpectra.map(one => ({ ...one, sigma: 0 }))],
    ['noAgent', scipyModel, tubes.map(one => ({ ...one, conc_mM: 0 })), scipySpectra],
    ['badConcentration', scipyModel, tubes.map(one => ({ ...one, conc_mM: -1 })), scipySpectra],
    ['badB1', scipyModel, tubes.map(one => ({ ...one, b1Scale: 0 })), scipySpectra],
    ['saturated', scipyModel, tubes, scipySpectra.map(one => ({ ...one, z: one.z.map(() => 0.01) }))],
    ['badField', { ...scipyModel, field_T: 0 }, tubes, scipySpectra],
    ['badPools', { ...scipyModel, pools: [] }, tubes, scipySpectra],
    ['badValue', { ...scipyModel, pools: [pool('a', -3)] }, tubes, scipySpectra],
    ['badStart', { ...scipyModel, pools: [pool('a', 60, { exchange_per_s: { kind: 'fitted', start: 5, min: 10 } })] }, tubes, scipySpectra],
    ['tooFewPoints', scipyModel, tubes, [0, 1].map(tube => ({ ...first, tube, offsets_ppm: [5, 6], z: [0.5, 0.6] }))],
  ] as const)('%s', (reason, model, someTubes, spectra) => {
    const outcome = fitSeries(model as SeriesModel, someTubes as readonly SeriesTube[], spectra as readonly SeriesSpectrum[])
    expect(outcome.ok).toBe(false)
    if (!outcome.ok) expect(outcome.reason).toBe(reason)
  })
})
