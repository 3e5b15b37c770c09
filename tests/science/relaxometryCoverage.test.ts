import { describe, expect, it } from 'vitest'
import { derivedOf } from '../../shared/science/least-squares/derived'
import { fitModel } from '../../shared/science/least-squares/fitModel'
import type { FitDone } from '../../shared/science/least-squares/outcome'
import { createSearches } from '../../shared/science/least-squares/varpro'
import type { Model } from '../../shared/science/models/define'
import { MODELS } from '../../shared/science/models/index'
import { createRandom, type RandomSource } from '../../shared/science/random'
import { fitRelaxivity, type RelaxivityTube } from '../../shared/science/relaxometry/relaxivity'
import { reportFlags } from '../../shared/science/relaxometry/flags'
import { ECHO_FLAGS } from '../../shared/science/relaxometry/tubeFlags'
import { fitTubes, type SignalForm } from '../../shared/science/relaxometry/tubes'

const isFull = process.env.LANTHORN_TEST === 'full'
const SERIES = isFull ? 10_000 : 600
const recovery = MODELS.inversionRecovery3 as Model
const TI_S = [0.02, 0.04, 0.08, 0.15, 0.3, 0.5, 0.8, 1.3, 2.1, 3.4, 5.5, 9]
const CONC_MM = [0, 0.1, 0.25, 0.5, 1, 2]
const R1_PER_MM_S = 4.2
const DIA_PER_S = 0.4
const TIMEOUT_MS = isFull ? 600_000 : 120_000

/**
 * In the full run 94 to 96 %, as asked. In the quick one four standard deviations of a binomial proportion: a correct interval misses it once in 16 000
 * runs, and the seed is fixed.
 */
function expectCoverage(inside: number, tries: number, slack = 0): void {
  const margin = isFull ? 0.01 : 4 * Math.sqrt((0.95 * 0.05) / tries)
  expect(Math.abs(inside / tries - 0.95), `${(100 * inside) / tries} %`).toBeLessThan(margin + slack)
}

const contains = (interval: readonly [number, number] | null, truth: number) => interval !== null && interval[0] <= truth && truth <= interval[1]

/** The relaxation time that a model is asked for, fitted or derived. */
const timeOf = (model: Model, fit: FitDone) => [...derivedOf(model, fit), ...fit.parameters].find(one => one.name === 't1_s' || one.name === 't2_s')!
const truthOf = ({ example, names, derived = [] }: Model): number => {
  const values = example.truth as Record<string, number>
  return values.t1_s ?? values.t2_s ?? derived.find(one => one.name === 't1_s')!.value(names.map(name => values[name]!))
}
/** Every model of a relaxation with Gaussian noise. The noise-floor models have noise in them and stand below. */
const GAUSSIAN = Object.values(MODELS as unknown as Record<string, Model>).filter(model => model.y.unit === 'au' && !model.names.includes('sigma_au'))

describe('coverage of the 95 % interval', () => {
  it.each(GAUSSIAN.flatMap(model => [0.005, 0.02].map(noise => [model.id, noise, model] as const)))('of the time by %s, σ unknown, noise %f of the largest signal [simulation]', (id, noise, model) => {
    const { x, settings, truth } = model.example
    const clean = x.map(at => model.evaluate(at, truth, settings))
    const size = Math.max(...clean.map(Math.abs))
    const random = createRandom(`coverage ${id} ${noise}`)
    const searches = createSearches()
    let inside = 0
    for (let k = 0; k < SERIES; k++) {
      const fit = fitModel(model, { x, y: clean.map(value => value + noise * size * random.normal()) }, { settings, searches })
      if (fit.ok && contains(timeOf(model, fit).interval, truthOf(model))) inside++
    }
    expectCoverage(inside, SERIES)
  }, TIMEOUT_MS)

  /** Region means of magnitudes, or of their squares, of 100 pixels whose signal sinks to a tenth of the noise. */
  const DEEP = { a_au: 300, t2_s: 0.06, sigma_au: 30 }
  const TE_S = Array.from({ length: 24 }, (_, i) => 0.012 * (i + 1))
  const PIXELS = 100
  function region(random: RandomSource, form: SignalForm): number[] {
    return TE_S.map((te) => {
      let sum = 0
      for (let pixel = 0; pixel < PIXELS; pixel++) {
        const square = (DEEP.a_au * Math.exp(-te / DEEP.t2_s) + DEEP.sigma_au * random.normal()) ** 2 + (DEEP.sigma_au * random.normal()) ** 2
        sum += form === 'meanSquares' ? square : Math.sqrt(square)
      }
      return sum / PIXELS
    })
  }
  it.each([['multiEchoNoiseFloor', 'signed'], ['multiEchoMeanSquares', 'meanSquares']] as const)('of T2 by %s where the echoes sink into Rician noise [simulation]', (id, form) => {
    const model = MODELS[id] as unknown as Model
    const random = createRandom(`coverage ${id}`)
    const tries = isFull ? 10_000 : 400
    let inside = 0
    for (let k = 0; k < tries; k++) {
      const { fit } = fitTubes(model, [{ x: TE_S, y: region(random, form) }], form).tubes[0]!
      if (fit.ok && contains(timeOf(model, fit).interval, DEEP.t2_s)) inside++
    }
    expectCoverage(inside, tries)
  }, TIMEOUT_MS)
  it('is lost by the plain decay there, which is flagged nearly every time [simulation]', () => {
    const [plain, offset] = [MODELS.multiEcho, MODELS.multiEchoOffset] as unknown as [Model, Model]
    const random = createRandom('plain in noise')
    const tries = isFull ? 2000 : 100
    let [inside, flagged] = [0, 0]
    for (let k = 0; k < tries; k++) {
      const y = region(random, 'signed')
      const fit = fitModel(plain, { x: TE_S, y })
      const beside = fitModel(offset, { x: TE_S, y })
      if (!fit.ok) throw new Error(fit.message)
      const t2 = timeOf(plain, fit)
      if (contains(t2.interval, DEEP.t2_s)) inside++
      const reports = reportFlags(ECHO_FLAGS, {
        fit, x: TE_S, signal_au: y, headline: t2, curveTime_s: t2.value, polarity: null, alternative: null, withOffset: beside.ok ? beside : null,
        noise: { sigma_au: DEEP.sigma_au, source: 'one pixel, from the background' }, blankRanges: [], isBlank: false,
      })
      if (reports.some(report => report.state === 'raised' && report.id === 'levelsOff')) flagged++
    }
    expect(inside / tries).toBeLessThan(0.05)
    expect(flagged / tries).toBeGreaterThan(0.95)
  }, TIMEOUT_MS)

  /** One series from signal to slope: tubes whose concentrations are off by a common factor and by pipetting. */
  function measure(random: RandomSource, errors: { scale: number, pipetting: number }) {
    const factor = 1 + errors.scale * random.normal()
    const tubes = CONC_MM.map((conc) => {
      const rate = DIA_PER_S + R1_PER_MM_S * conc * factor * (1 + errors.pipetting * random.normal())
      return { x: TI_S, y: TI_S.map(ti => recovery.evaluate(ti, { a_au: 1000, b_au: -1900, t1_s: 1 / rate }) + 5 * random.normal()) }
    })
    const { tubes: fits, pools } = fitTubes(recovery, tubes, 'signed')
    const measured = fits.map(({ fit }, i): RelaxivityTube => {
      if (!fit.ok) throw new Error(fit.message)
      const t1 = fit.parameters[2]!
      return { conc_mM: CONC_MM[i]!, concSe_mM: errors.pipetting > 0 ? errors.pipetting * CONC_MM[i]! : null, time_s: t1.value, timeSe_s: t1.se, isBlank: i === 0 }
    })
    return { measured, timeSeDof: pools[0]?.dof ?? null }
  }
  function count(seed: string, errors: { scale: number, pipetting: number }, stated: { scale: boolean, pipetting: boolean }): { inside: number, tries: number } {
    const random = createRandom(seed)
    const tries = isFull ? 10_000 : 300
    let inside = 0
    for (let k = 0; k < tries; k++) {
      const { measured, timeSeDof } = measure(random, errors)
      const tubes = measured.map(tube => stated.pipetting ? tube : { ...tube, concSe_mM: null })
      const series = fitRelaxivity(tubes, { scale_frac: stated.scale ? errors.scale : null, timeSeDof })
      if (series.ok && contains(series.relaxivity_per_mM_s.interval, R1_PER_MM_S)) inside++
    }
    return { inside, tries }
  }
  it('of the relaxivity, from signals to slope, with one σ pooled over the tubes [simulation]', () => {
    const { inside, tries } = count('coverage r1', { scale: 0, pipetting: 0 }, { scale: true, pipetting: true })
    // max(1, χ²red) never narrows an interval: with four degrees of freedom it covers 2 % more than it says.
    expectCoverage(inside, tries, 0.02)
  }, TIMEOUT_MS)
  it('of the relaxivity with 2 % common and 1 % own concentration error, both stated [simulation]', () => {
    const { inside, tries } = count('coverage scale', { scale: 0.02, pipetting: 0.01 }, { scale: true, pipetting: true })
    expectCoverage(inside, tries)
  }, TIMEOUT_MS)
  it('of the relaxivity with 2 % own concentration error that nobody stated: the scatter about the line stands in for it [simulation]', () => {
    const { inside, tries } = count('coverage scatter', { scale: 0, pipetting: 0.02 }, { scale: true, pipetting: false })
    // Weights that ignore the error of the concentration are not the best, which costs a few per cent.
    expectCoverage(inside, tries, 0.05)
  }, TIMEOUT_MS)
  it('falls under 70 % when the common error is not stated: that is why it is asked for [simulation]', () => {
    const { inside, tries } = count('coverage bare', { scale: 0.02, pipetting: 0.01 }, { scale: false, pipetting: true })
    expect(inside / tries).toBeLessThan(0.7)
  }, TIMEOUT_MS)
})
