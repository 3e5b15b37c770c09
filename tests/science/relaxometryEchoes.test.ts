import { describe, expect, it } from 'vitest'
import { scaledBessel } from '../../shared/science/bessel'
import { bootstrapFit } from '../../shared/science/least-squares/bootstrap'
import { fitModel, type FitData, type FitOptions } from '../../shared/science/least-squares/fitModel'
import type { FitDone } from '../../shared/science/least-squares/outcome'
import { profileFit } from '../../shared/science/least-squares/profileFit'
import type { Model } from '../../shared/science/models/define'
import { MODELS } from '../../shared/science/models/index'
import { meanMagnitude, RAYLEIGH_MEAN, spreadOfMagnitude } from '../../shared/science/models/multiEchoNoise'
import { createRandom } from '../../shared/science/random'
import { reportFlags } from '../../shared/science/relaxometry/flags'
import { fitInNoise } from '../../shared/science/relaxometry/noiseFloor'
import { fitTubes } from '../../shared/science/relaxometry/tubes'
import { ECHO_FLAGS } from '../../shared/science/relaxometry/tubeFlags'

const [plain, floor, squares, offset] = [MODELS.multiEcho, MODELS.multiEchoNoiseFloor, MODELS.multiEchoMeanSquares, MODELS.multiEchoOffset] as unknown as Model[]
const TE_S = Array.from({ length: 32 }, (_, i) => 0.01 * (i + 1))
const TRUTH = { a_au: 300, t2_s: 0.06, sigma_au: 30 }
const PIXELS = 400

/** Magnitudes of pixels in complex Gaussian noise, averaged over a region: means, and means of squares. */
function region(seed: string, { a_au, t2_s, sigma_au } = TRUTH): { means: number[], meanSquares: number[] } {
  const random = createRandom(seed)
  const pixels = TE_S.map(te => Array.from({ length: PIXELS }, () => Math.hypot(a_au * Math.exp(-te / t2_s) + sigma_au * random.normal(), sigma_au * random.normal())))
  const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / values.length
  return { means: pixels.map(mean), meanSquares: pixels.map(values => mean(values.map(value => value * value))) }
}

function done(model: Model, y: number[]): FitDone {
  const fit = fitModel(model, { x: TE_S, y })
  if (!fit.ok) throw new Error(fit.message)
  return fit
}
const t2Of = (fit: FitDone) => fit.parameters.find(one => one.name === 't2_s')!
const raised = (fit: FitDone, y: number[], sigma_au: number | null = null): string[] => {
  const beside = fitModel(offset!, { x: TE_S, y })
  return reportFlags(ECHO_FLAGS, {
    fit, x: TE_S, signal_au: y, headline: t2Of(fit), curveTime_s: t2Of(fit).value, polarity: null, alternative: null, withOffset: beside.ok ? beside : null,
    noise: sigma_au === null ? null : { sigma_au, source: 'one pixel, from the background' }, blankRanges: [], isBlank: false,
  }).filter(report => report.state === 'raised').map(report => report.id)
}

describe('the mean of a magnitude in noise', () => {
  it('is Rayleigh\'s for no signal, and the signal plus σ²/2A where it is strong [Koay & Basser 2006]', () => {
    expect(meanMagnitude(0, 2).mean).toBeCloseTo(2 * RAYLEIGH_MEAN, 12)
    expect(meanMagnitude(1000, 2).mean).toBeCloseTo(1000 + 4 / 2000, 7)
    expect(meanMagnitude(5, 0)).toEqual({ mean: 5, byAmplitude: 1, bySigma: 0 })
    expect(meanMagnitude(1e12, 1e-6).mean).toBe(1e12)
  })
  it('is what simulated pixels average to [simulation]', () => {
    const random = createRandom('Rice')
    for (const a of [0.5, 1.5, 4]) {
      const n = 40_000
      let sum = 0
      for (let k = 0; k < n; k++) sum += Math.hypot(a + random.normal(), random.normal())
      expect(Math.abs(sum / n - meanMagnitude(a, 1).mean)).toBeLessThan(4 / Math.sqrt(n))
    }
  })
  it('rests on Bessel functions of scipy\'s values [scipy 1.10 special.ive]', () => {
    // python3 -c "from scipy.special import ive; print([(u, ive(0, u), ive(1, u)) for u in (0.01, 0.5, 3, 23.9, 24.1, 200, 1e5)])"
    for (const [u, i0, i1] of [
      [0.01, 0.9900745851497074, 0.004950311047118277], [0.5, 0.6450352704491501, 0.15642080318487167], [3, 0.2430003541618254, 0.19682671329730084], [23.9, 0.08204124995496268, 0.08030614731981038],
      [24.1, 0.08169641631699676, 0.0799831060420831], [200, 0.02822715994911192, 0.02815650339483292], [1e5, 0.0012615678379767766, 0.0012615615301218171],
    ] as const) {
      expect(scaledBessel(u).i0 / i0).toBeCloseTo(1, 13)
      expect(scaledBessel(u).i1 / i1).toBeCloseTo(1, 13)
    }
    expect(scaledBessel(-1).i0).toBeNaN()
  })
})

describe('the spread of a magnitude', () => {
  it('is 0.655 σ for no signal and σ where it is strong, and what simulated pixels scatter by [Koay & Basser 2006; simulation]', () => {
    expect(spreadOfMagnitude(0, 2)).toBeCloseTo(2 * Math.sqrt(2 - Math.PI / 2), 12)
    expect(spreadOfMagnitude(59, 1) / spreadOfMagnitude(61, 1)).toBeCloseTo(1, 3)
    const random = createRandom('spread')
    const values = Array.from({ length: 40_000 }, () => Math.hypot(1.5 + random.normal(), random.normal()))
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length
    expect(spreadOfMagnitude(1.5, 1)).toBeCloseTo(Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length), 2)
  })
})

describe('echoes that sink into the noise', () => {
  const { means, meanSquares } = region('sinking')
  it('read too long by the plain decay, which is flagged with what to do', () => {
    const fit = done(plain!, means)
    expect(t2Of(fit).value).toBeGreaterThan(1.15 * TRUTH.t2_s)
    expect(raised(fit, means, TRUTH.sigma_au)).toEqual(expect.arrayContaining(['runs', 'weakEcho', 'levelsOff']))
    expect(ECHO_FLAGS.find(flag => flag.id === 'levelsOff')!.advice).toContain('noise-floor model')
  })
  it('give T2 and σ by the noise-floor model within three standard errors', () => {
    const fit = done(floor!, means)
    for (const { name, value, se } of fit.parameters) expect(Math.abs(value - TRUTH[name as keyof typeof TRUTH])).toBeLessThan(3.2 * se!)
  })
  it('give T2 by mean squares; squares of the means read T2 low [Miller & Joseph 1993; methods: 3 to 6 %]', () => {
    const { fit } = fitInNoise(squares!, { x: TE_S, y: meanSquares }, 'meanSquares', {})
    if (!fit.ok) throw new Error(fit.message)
    expect(Math.abs(t2Of(fit).value - TRUTH.t2_s)).toBeLessThan(3.2 * t2Of(fit).se!)
    const { fit: wrong } = fitInNoise(squares!, { x: TE_S, y: means.map(value => value * value) }, 'meanSquares', {})
    if (!wrong.ok) throw new Error(wrong.message)
    const ratio = t2Of(wrong).value / TRUTH.t2_s
    expect(ratio).toBeLessThan(0.985)
    expect(ratio).toBeGreaterThan(0.9)
  })
  it('far above the noise leave the floor unseen: the plain decay, with an interval', () => {
    const clean = TE_S.map((te, i) => 1000 * Math.exp(-te / 0.4) + (i % 3) - 1)
    const { fit } = fitInNoise(squares!, { x: TE_S, y: clean.map(value => value * value - 500) }, 'meanSquares', {})
    if (!fit.ok) throw new Error(fit.message)
    expect(t2Of(fit).interval).not.toBeNull()
    expect(fit.fixed).toEqual({ sigma_au: 0 })
  })
})

describe('intervals asked for besides Student\'s', () => {
  const bootstrap = (model: Model, data: FitData, fit: FitDone, options: FitOptions = {}) => bootstrapFit(model, data, fit, { ...options, seed: 'draws', samples: 199 })

  it('keep a noise at 0 where it was not seen, in every draw', () => {
    let held = 0
    for (let k = 0; k < 12; k++) {
      const random = createRandom(`unseen ${k}`)
      const data = { x: TE_S, y: TE_S.map(te => 1000 * Math.exp(-te / 0.3) + 3 * random.normal()) }
      const { fit } = fitTubes(floor!, [data], 'signed').tubes[0]!
      if (!fit.ok || fit.noInterval || fit.fixed.sigma_au !== 0) continue
      held++
      const found = bootstrap(floor!, data, fit)
      if (!found.ok) throw new Error(found.message)
      expect(found.failed).toBe(0)
      expect(found.intervals.map(one => one.name)).toEqual(['a_au', 't2_s'])
    }
    expect(held).toBeGreaterThan(2)
  })

  it('hold the estimate of mean squares: they are worked out with the weights of the fit', () => {
    for (let k = 0; k < 12; k++) {
      const data = { x: TE_S, y: region(`profile ${k}`).meanSquares }
      const { fit, relativeSigma = null } = fitTubes(squares!, [data], 'meanSquares').tubes[0]!
      if (!fit.ok || fit.noInterval) throw new Error('no interval')
      const weighted = { ...data, sigma: relativeSigma }
      const options = { relativeSigma: true }
      const t2 = t2Of(fit)
      const profile = profileFit(squares!, weighted, fit, options).find(one => one.name === 't2_s')!.interval
      const draws = bootstrap(squares!, weighted, fit, options)
      if (!draws.ok) throw new Error(draws.message)
      const drawn = draws.intervals.find(one => one.name === 't2_s')!
      for (const [low, high] of [[profile.low!, profile.high!], [drawn.low, drawn.high]]) {
        expect(low).toBeLessThan(t2.value)
        expect(high).toBeGreaterThan(t2.value)
        // A decay that is well seen has intervals of much the same width by all three ways.
        expect((high! - low!) / (t2.interval![1] - t2.interval![0])).toBeGreaterThan(0.6)
        expect((high! - low!) / (t2.interval![1] - t2.interval![0])).toBeLessThan(1.4)
      }
    }
  })
})

describe('a train whose echoes alternate', () => {
  it('is flagged; one that does not is not [even and odd echoes]', () => {
    const random = createRandom('alternating')
    const decay = TE_S.map(te => 1000 * Math.exp(-te / 0.1) + 2 * random.normal())
    expect(raised(done(plain!, decay), decay)).not.toContain('evenOdd')
    const odd = decay.map((value, i) => i % 2 === 0 ? 0.99 * value : value)
    expect(raised(done(plain!, odd), odd)).toContain('evenOdd')
  })
  it('is flagged where it grows, is cut off at its top, or ends early', () => {
    const growing = TE_S.map((te, i) => 100 * Math.exp(te / 0.3) + (i % 2))
    expect(raised(done(plain!, growing), growing)).toContain('wrongWay')
    const clipped = TE_S.map(te => Math.min(800, 1000 * Math.exp(-te / 0.2)))
    expect(raised(done(plain!, clipped), clipped)).toContain('clipped')
    const short = TE_S.map((te, i) => 1000 * Math.exp(-te / 0.6) + (i % 3))
    expect(raised(done(plain!, short), short)).toContain('shortTrain')
  })
})
