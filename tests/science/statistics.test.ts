import { describe, expect, it } from 'vitest'
import reference from '../../fixtures/reference/statistics/values.json'
import { logGamma } from '../../shared/science/specialFunctions'
import {
  chi2Cdf, chi2Quantile, chi2UpperP, fCdf, fUpperP, inverseVarianceMean, normalCdf, normalQuantile, tCdf, tQuantile, tTwoSidedP,
} from '../../shared/science/statistics'

/** The claim of the module: 12 significant digits. */
const DIGITS_12 = 1e-12

function expectClose(got: number, wanted: number, tolerance = DIGITS_12): void {
  expect(Math.abs(got - wanted), `${got} against ${wanted}`).toBeLessThanOrEqual(tolerance * Math.abs(wanted))
}

describe('distributions', () => {
  it('gives Student t quantiles to 12 digits [mpmath, 40 digits]', () => {
    for (const [p, dof, t] of reference.tQuantile as [number, number, number][]) {
      // The tail 1 − p is itself a rounded double: that bounds what any quantile far out can hold.
      expectClose(tQuantile(p, dof), t, Math.max(DIGITS_12, 2 ** -53 / (1 - p)))
    }
  })
  it('gives Student t two-sided p to 12 digits, far tails included [mpmath, 40 digits]', () => {
    for (const [t, dof, p] of reference.tTwoSided as [number, number, number][]) expectClose(tTwoSidedP(t, dof), p)
  })
  it('gives F upper tails to 12 digits [mpmath, 40 digits]', () => {
    for (const [f, a, b, p] of reference.fUpper as [number, number, number, number][]) expectClose(fUpperP(f, a, b), p)
  })
  it('gives χ² lower tails and quantiles to 12 digits [mpmath, 40 digits]', () => {
    for (const [x, dof, p] of reference.chi2Cdf as [number, number, number][]) expectClose(chi2Cdf(x, dof), p)
    for (const [p, dof, x] of reference.chi2Quantile as [number, number, number][]) expectClose(chi2Quantile(p, dof), x)
  })
  it('gives the normal distribution and its quantiles to 12 digits [mpmath, 40 digits]', () => {
    for (const [z, p] of reference.normalCdf as [number, number][]) expectClose(normalCdf(z), p)
    for (const [p, z] of (reference.normalQuantile as [number, number][]).filter(([p]) => p !== 0.5)) expectClose(normalQuantile(p), z)
  })
  it('gives the logarithm of the gamma function [mpmath, 40 digits]', () => {
    for (const [x, value] of reference.logGamma as [number, number][]) expectClose(logGamma(x), value)
  })
  it('matches the printed tables: t(0.975; 10) = 2.228, χ²(0.95; 5) = 11.070, F(0.95; 3, 10) = 3.708 [standard tables, from memory]', () => {
    expect(tQuantile(0.975, 10)).toBeCloseTo(2.228, 3)
    expect(chi2Quantile(0.95, 5)).toBeCloseTo(11.07, 2)
    expect(fCdf(3.708, 3, 10)).toBeCloseTo(0.95, 4)
  })
})

describe('edges', () => {
  it('is symmetric: t(p) = −t(1 − p), and both tails of χ² add to 1 [definition]', () => {
    expect(tQuantile(0.25, 7)).toBe(-tQuantile(0.75, 7))
    expect(tCdf(-1.3, 4) + tCdf(1.3, 4)).toBeCloseTo(1, 14)
    expect(chi2Cdf(3, 4) + chi2UpperP(3, 4)).toBeCloseTo(1, 14)
  })
  it('turns into the normal distribution for unlimited degrees of freedom [limit]', () => {
    expect(tQuantile(0.975, Infinity)).toBe(normalQuantile(0.975))
    expectClose(tQuantile(0.975, 1e9), normalQuantile(0.975), 1e-8)
  })
  it('answers NaN outside the domain, infinite at the ends [house rule]', () => {
    for (const value of [tQuantile(1.1, 3), tQuantile(0.5, 0), chi2Cdf(-1, 2), fUpperP(1, 0, 2), normalQuantile(NaN), tCdf(NaN, 3)]) expect(value).toBeNaN()
    expect(normalQuantile(0.5)).toBe(0)
    expect(normalQuantile(0)).toBe(-Infinity)
    expect(tQuantile(1, 3)).toBe(Infinity)
    expect(chi2Quantile(0, 3)).toBe(0)
  })
  it('weights values by inverse variance [closed form: 1 ± 1 and 4 ± 2 give 1.6 ± √0.8]', () => {
    const pooled = inverseVarianceMean([1, 4], [1, 2])
    expect(pooled.mean).toBeCloseTo(1.6, 14)
    expect(pooled.se).toBeCloseTo(Math.sqrt(0.8), 14)
    expect(pooled.chi2).toBeCloseTo(1.8, 14)
  })
})
