import { describe, expect, it } from 'vitest'
import { fitSaturation, type SaturationPoint } from '#shared/science/kinetics/saturationFit'
import { createRandom } from '#shared/science/random'

const made = (seed: string, K: number, noise: number): SaturationPoint[] => {
  const random = createRandom(seed)
  return [1e-3, 3e-3, 0.01, 0.03, 0.06, 0.1].map(c => ({ conc_M: c, rate_per_s: (1e-6 + 2e-4 * K * c) / (1 + K * c) * (1 + noise * random.normal()), se_per_s: null }))
}

describe('rates that level off with acid', () => {
  it('give back k1 and the protonation constant of the complex, 115 M^-1, exactly without noise [K_H of the triacetate: Inorg. Chem. 32, 587 (1993)]', () => {
    const fit = fitSaturation(made('exact', 115, 0))
    if (!fit.ok) throw new Error(fit.message)
    expect(fit.binding_per_M.value / 115).toBeCloseTo(1, 5)
    expect(fit.k1_per_s.value / 2e-4).toBeCloseTo(1, 5)
  })

  it('hold the true constants in their 95 % intervals, and k0 below its bound, in nine of ten seeded series or more', () => {
    const runs = process.env.LANTHORN_TEST === 'full' ? 500 : 60
    let [binding, bound] = [0, 0]
    for (let i = 0; i < runs; i++) {
      const fit = fitSaturation(made(`saturation-${i}`, 115, 0.03))
      if (!fit.ok) continue
      const [low, high] = fit.binding_per_M.interval!
      if (low <= 115 && high >= 115) binding++
      if (fit.k0_per_s.upper95 >= 1e-6) bound++
    }
    expect(binding / runs).toBeGreaterThan(0.9)
    expect(bound / runs).toBeGreaterThan(0.9)
  }, 120_000)

  it('refuse to split k1 from K where a straight line does as well, and four concentrations', () => {
    expect(fitSaturation(made('straight', 0.01, 0.02))).toMatchObject({ ok: false, reason: 'doesNotLevelOff' })
    expect(fitSaturation(made('few', 115, 0).slice(0, 4))).toMatchObject({ ok: false, reason: 'tooFewPoints' })
  })
})
