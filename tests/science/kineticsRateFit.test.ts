import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { halfLifeOf } from '#shared/science/kinetics/firstOrder'
import { fitRateLaw, lawOfFit, type RateFit, type RatePoint } from '#shared/science/kinetics/rateFit'
import { evaluateRateLaw, type RateResult } from '#shared/science/kinetics/rateLaw'
import { createRandom } from '#shared/science/random'

const { laws } = JSON.parse(readFileSync(new URL('../../fixtures/reference/kinetics/fits.json', import.meta.url), 'utf8')) as { laws: { h: number[], y: number[], sigma: number[], values: number[], chi2: number }[] }
const acid_M = [0.05, 0.1, 0.2, 0.35, 0.5, 0.75, 1]
const point = (h: number, rate_per_s: number, se_per_s: number | null = null, temperature_K = 298.15): RatePoint => ({ conditions: { pH: -Math.log10(h), temperature_K, competitors_M: {} }, rate_per_s, se_per_s })
const fitted = (points: readonly RatePoint[], ...names: Parameters<typeof fitRateLaw>[1][number][]): RateFit => {
  const fit = fitRateLaw(points, names)
  if (!fit.ok) throw new Error(fit.message)
  return fit
}
const atPlasma = (fit: RateFit): RateResult => {
  const answer = evaluateRateLaw(lawOfFit(fit, { kJ_per_mol: null, se_kJ_per_mol: null }), { pH: 7.4, temperature_K: 298.15, competitors_M: {} })
  if (!answer.ok) throw new Error(answer.message)
  return answer
}
const made = (seed: string, k0: number, k1: number): RatePoint[] => {
  const random = createRandom(seed)
  return acid_M.map(h => point(h, (k0 + k1 * h) * (1 + 0.03 * random.normal())))
}

describe('rates against acid and metal', () => {
  it('reaches the non-negative minimum of an independent solver [scipy nnls, fixtures/reference/kinetics/fits.py]', () => {
    for (const law of laws) {
      const fit = fitted(law.h.map((h, i) => point(h, law.y[i]!, law.sigma[i]!)), 'k0_per_s', 'k1_per_M_s', 'k2_per_M2_s')
      expect(fit.chi2 / law.chi2).toBeCloseTo(1, 8)
      fit.terms.forEach((term, i) => { if (term.kind === '=') expect(term.value / law.values[i]!).toBeCloseTo(1, 7) })
      fit.terms.forEach((term, i) => expect(term.upper95).toBeGreaterThan(law.values[i]!))
    }
  })

  it('gives from 0.05 to 1 M acid with 3 % noise a half-life at pH 7.4 that is "at least", and counts the decades', () => {
    for (let i = 0; i < 20; i++) {
      const rate = atPlasma(fitted(made(`acid-${i}`, 0, 2e-5), 'k0_per_s', 'k1_per_M_s'))
      expect(halfLifeOf(rate).kind).toBe('>')
      expect(rate.decadesExtrapolated).toBeCloseTo(7.4 - 1.30103, 4)
      // 3 % noise cannot show a half-life of thousands of years
      expect(halfLifeOf(rate).value / 31557600).toBeLessThan(50)
    }
  })

  it('covers the true k0, when there is one, by its one-sided 95 % bound in 93 % or more of seeded series', () => {
    const runs = process.env.LANTHORN_TEST === 'full' ? 4000 : 400
    for (const k0 of [2e-7, 1e-6]) {
      let inside = 0
      for (let i = 0; i < runs; i++) if (fitted(made(`bound-${k0}-${i}`, k0, 2e-5), 'k0_per_s', 'k1_per_M_s').terms[0]!.upper95 >= k0) inside++
      expect(inside / runs).toBeGreaterThan(0.93)
    }
  }, 60_000)

  it('tells a zinc term from acid where both were varied, and refuses terms that were not', () => {
    const random = createRandom('zinc')
    const points = [0.001, 0.003, 0.01].flatMap(h => [0, 0.01, 0.03].map((Zn): RatePoint => ({
      conditions: { pH: -Math.log10(h), temperature_K: 298.15, competitors_M: { Zn } }, rate_per_s: (0.58 * h + 0.056 * Zn) * (1 + 0.02 * random.normal()), se_per_s: null,
    })))
    const [k1, kZn] = fitted(points, 'k1_per_M_s', 'kZn_per_M_s').terms
    expect(Math.abs(k1!.value - 0.58)).toBeLessThan(3 * k1!.se!)
    expect(Math.abs(kZn!.value - 0.056)).toBeLessThan(3 * kZn!.se!)
    expect(fitRateLaw(made('one', 0, 1e-5), ['k1_per_M_s', 'kZn_per_M_s'])).toMatchObject({ ok: false, reason: 'indistinguishable' })
  })

  it('refuses a rate law from two points, °C in place of K, several temperatures and rates not above zero', () => {
    expect(fitRateLaw(made('x', 0, 1e-5).slice(0, 2), ['k1_per_M_s'])).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(fitRateLaw(acid_M.map(h => point(h, h * 1e-5, null, 25)), ['k1_per_M_s'])).toMatchObject({ ok: false, reason: 'celsiusAsKelvin' })
    expect(fitRateLaw(acid_M.map((h, i) => point(h, h * 1e-5, null, 298 + i)), ['k1_per_M_s'])).toMatchObject({ ok: false, reason: 'severalTemperatures' })
    expect(fitRateLaw(acid_M.map(h => point(h, h - 0.2)), ['k1_per_M_s'])).toMatchObject({ ok: false, reason: 'badPoint' })
  })

  it('leaves no value unbounded where the rates lie on the law without scatter', () => {
    const fit = fitted(acid_M.map(h => point(h, 1e-5 * h)), 'k0_per_s', 'k1_per_M_s')
    expect(fit.terms[1]!.value).toBeCloseTo(1e-5, 12)
    expect(fit.terms[0]!.upper95).toBeLessThan(1e-12)
  })
})
