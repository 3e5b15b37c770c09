import { describe, expect, it } from 'vitest'
import { fitModel } from '../../shared/science/least-squares/fitModel'
import { prepareSeparable } from '../../shared/science/least-squares/varpro'
import type { Model } from '../../shared/science/models/define'
import { MODELS } from '../../shared/science/models/index'
import { createRandom, type RandomSource } from '../../shared/science/random'
import { fitRelaxivity, type RelaxivityTube } from '../../shared/science/relaxometry/relaxivity'
import { fitTubes } from '../../shared/science/relaxometry/tubes'

const isFull = process.env.LANTHORN_TEST === 'full'
const SERIES = isFull ? 10_000 : 300
const recovery = MODELS.inversionRecovery3 as Model
const TI_S = [0.02, 0.04, 0.08, 0.15, 0.3, 0.5, 0.8, 1.3, 2.1, 3.4, 5.5, 9]
const CONC_MM = [0, 0.1, 0.25, 0.5, 1, 2]
const R1_PER_MM_S = 4.2
const DIA_PER_S = 0.4
const TIMEOUT_MS = isFull ? 600_000 : 120_000

/** Four standard deviations of a binomial proportion around 95 %: a correct interval misses it once in 16 000 runs, and the seed is fixed. */
function expectCoverage(inside: number, tries: number, slack = 0): void {
  const margin = 4 * Math.sqrt((0.95 * 0.05) / tries) + slack
  expect(Math.abs(inside / tries - 0.95), `${(100 * inside) / tries} %`).toBeLessThan(margin)
}

const contains = (interval: readonly [number, number] | null, truth: number) => interval !== null && interval[0] <= truth && truth <= interval[1]

describe('coverage of the 95 % interval', () => {
  it('of T1 with σ unknown, on seeded recoveries [simulation]', () => {
    const random = createRandom('coverage T1')
    const search = prepareSeparable(recovery, TI_S, null, {})!
    const truth = { a_au: 1000, b_au: -1900, t1_s: 0.8 }
    let inside = 0
    for (let k = 0; k < SERIES; k++) {
      const y = TI_S.map(ti => recovery.evaluate(ti, truth) + 8 * random.normal())
      const fit = fitModel(recovery, { x: TI_S, y }, { search })
      if (fit.ok && contains(fit.parameters[2]!.interval, truth.t1_s)) inside++
    }
    expectCoverage(inside, SERIES)
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
    const tries = isFull ? 2500 : 100
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
    expectCoverage(inside, tries, 0.02)
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
