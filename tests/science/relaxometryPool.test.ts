import { describe, expect, it } from 'vitest'
import reference from '../../fixtures/reference/line/ancova.json'
import { testAgreement, type SlopeWithErrors } from '../../shared/science/relaxometry/agreement'
import { testEqualSlopes } from '../../shared/science/relaxometry/ancova'
import { concentrationFromIcp, concentrationFromShift, susceptibilityShift_ppm } from '../../shared/science/relaxometry/concentration'
import { poolReplicates } from '../../shared/science/relaxometry/pool'
import { GD_MU_EFF } from '../../shared/science/constants'
import { createRandom } from '../../shared/science/random'
import { fitRelaxivity, type RelaxivityTube } from '../../shared/science/relaxometry/relaxivity'
import { tQuantile } from '../../shared/science/statistics'

describe('equal slopes', () => {
  reference.sets.forEach((set, k) => {
    it(`set ${k + 1}${set.weighted ? ', weighted' : ''}: slopes, F and p to 9 digits [R anova of lm]`, () => {
      const found = testEqualSlopes(set.batches.map((batch, i) => ({ label: `batch ${i}`, conc_mM: batch.x, rate_per_s: batch.y, rateSe_per_s: set.weighted ? batch.sigma : null })))
      if (!found.ok) throw new Error(found.message)
      found.slopes.forEach((slope, i) => expect(slope.slope_per_mM_s / set.slopes[i]!).toBeCloseTo(1, 9))
      expect(found.commonSlope_per_mM_s / set.common).toBeCloseTo(1, 9)
      expect(found.f / set.f).toBeCloseTo(1, 7)
      expect(found.p / set.p).toBeCloseTo(1, 7)
    })
  })
  it('refuses one batch, a batch without a line, and two tubes each', () => {
    const batch = { label: 'a', conc_mM: [0, 1], rate_per_s: [1, 2], rateSe_per_s: null }
    expect(testEqualSlopes([batch])).toMatchObject({ ok: false, reason: 'tooFewBatches' })
    expect(testEqualSlopes([batch, { ...batch, label: 'b', conc_mM: [1, 1] }])).toMatchObject({ ok: false, reason: 'noLine', message: expect.stringContaining('b:') })
    expect(testEqualSlopes([batch, batch])).toMatchObject({ ok: false, reason: 'noFreedom' })
  })
})

describe('one relaxivity, all errors counted', () => {
  const slope = (value: number, more: Partial<SlopeWithErrors> = {}): SlopeWithErrors => ({ value, fitSe: 0.03, scale_frac: 0, stock: 'a', dof: null, ...more })

  it('is the inverse-variance mean and its χ² where nothing is shared [closed form]', () => {
    const found = testAgreement([slope(4, { fitSe: 0.1 }), slope(4.3, { fitSe: 0.2, stock: 'b' })])!
    expect(found.common).toBeCloseTo((4 / 0.01 + 4.3 / 0.04) / (1 / 0.01 + 1 / 0.04), 12)
    expect(found.f).toBeCloseTo(0.3 ** 2 / (0.01 + 0.04), 12)
    expect(found.p).toBeCloseTo(0.1797, 3)
  })
  it('does not excuse a difference between two series of one stock, whose error moves both [closed form]', () => {
    const one = testAgreement([slope(4, { scale_frac: 0.05 }), slope(4.2, { scale_frac: 0.05 })])!
    const two = testAgreement([slope(4, { scale_frac: 0.05 }), slope(4.2, { scale_frac: 0.05, stock: 'b' })])!
    expect(one.f).toBeCloseTo(0.2 ** 2 / (2 * 0.03 ** 2), 9)
    expect(one.p).toBeLessThan(1e-5)
    expect(two.p).toBeGreaterThan(0.4)
    expect(two.commonSe).toBeCloseTo(Math.sqrt((0.03 ** 2 + (4.1 * 0.05) ** 2) / 2), 9)
  })
  it('is doubted at p below 0.01 about once in a hundred where two stocks of one relaxivity are 2 % apart, and the lines alone in a third of the cases [simulation]', () => {
    const random = createRandom('stocks')
    const tries = 400
    let [doubted, notParallel] = [0, 0]
    for (let k = 0; k < tries; k++) {
      const lines = ['a', 'b'].map((stock) => {
        const factor = 1 + 0.02 * random.normal()
        const conc_mM = [0, 0.25, 0.5, 1, 2]
        const rates = conc_mM.map(c => 0.4 + 4 * c * factor * (1 + 0.01 * random.normal()))
        const tubes = rates.map((rate, i): RelaxivityTube => ({ conc_mM: conc_mM[i]!, concSe_mM: 0.01 * conc_mM[i]!, time_s: 1 / (rate * (1 + 0.004 * random.normal())), timeSe_s: 0.004 / rate, isBlank: i === 0 }))
        const line = fitRelaxivity(tubes, { scale_frac: 0.02 })
        if (!line.ok) throw new Error(line.message)
        return { stock, tubes, line }
      })
      const found = testAgreement(lines.map(({ stock, line }) => slope(line.relaxivity_per_mM_s.value, { fitSe: line.fitSe_per_mM_s!, scale_frac: 0.02, stock, dof: 3 })))!
      if (found.p < 0.01) doubted++
      const parallel = testEqualSlopes(lines.map(({ stock, tubes }) => ({ label: stock, conc_mM: tubes.map(tube => tube.conc_mM), rate_per_s: tubes.map(tube => 1 / tube.time_s), rateSe_per_s: tubes.map(tube => tube.timeSe_s! / tube.time_s ** 2) })))
      if (parallel.ok && parallel.p < 0.01) notParallel++
    }
    expect(doubted / tries).toBeLessThan(0.02)
    expect(notParallel / tries).toBeGreaterThan(0.25)
  }, 60_000)
  it('is not judged from one slope or without errors', () => {
    expect(testAgreement([slope(4)])).toBeNull()
    expect(testAgreement([slope(4), slope(4.1, { fitSe: 0 })])).toBeNull()
  })
})

describe('replicates', () => {
  it('keep the error of their stock however often one is measured [closed form]', () => {
    const pooled = poolReplicates([1, 2, 3, 4].map(k => ({ value: 4 + k / 100, se: Math.hypot(0.04, 0.08), commonSe: 0.08, preparation: 'one stock' })))
    expect(pooled.ok && pooled.se).toBeCloseTo(Math.hypot(0.04 / 2, 0.08), 12)
    expect(poolReplicates([{ value: 4, se: 0.1, commonSe: 0.1, preparation: 'a' }])).toMatchObject({ ok: false, reason: 'badError' })
  })
  it('are the inverse-variance mean while they agree, interval by t with preparations − 1 [closed form]', () => {
    const pooled = poolReplicates([{ value: 4.2, se: 0.1, preparation: 'a' }, { value: 4.3, se: 0.1, preparation: 'b' }, { value: 4.25, se: 0.1, preparation: 'c' }])
    if (!pooled.ok) throw new Error(pooled.message)
    expect(pooled.value).toBeCloseTo(4.25, 12)
    expect(pooled.se).toBeCloseTo(0.1 / Math.sqrt(3), 12)
    expect(pooled).toMatchObject({ preparations: 3, betweenSd: 0 })
    expect(pooled.interval![1] - pooled.value).toBeCloseTo(tQuantile(0.975, 2) * pooled.se, 12)
  })
  it('find the variance between preparations: 0, 2 and 4 without errors of note give 4 [sample variance, limit]', () => {
    const pooled = poolReplicates([0, 2, 4].map(value => ({ value, se: 1e-6, preparation: `p${value}` })))
    expect(pooled.ok && pooled.betweenSd).toBeCloseTo(2, 6)
    expect(pooled.ok && pooled.value).toBeCloseTo(2, 12)
    expect(pooled.ok && pooled.homogeneityP).toBeLessThan(1e-6)
  })
  it('count repeats of one preparation as one, and give no interval for a single one', () => {
    const pooled = poolReplicates([1, 2, 3].map(k => ({ value: 4 + k / 100, se: 0.1, preparation: 'same' })))
    expect(pooled).toMatchObject({ ok: true, preparations: 1, interval: null, betweenSd: null })
    expect(pooled.ok && pooled.se).toBeCloseTo(0.1 / Math.sqrt(3), 12)
  })
  it('cover the truth in 95 % of 1 500 simulated sets of four preparations, within 2 % [simulation]', () => {
    const random = createRandom('pool')
    let inside = 0
    for (let k = 0; k < 1500; k++) {
      const pooled = poolReplicates([0.03, 0.05, 0.08, 0.04].map((se, i) => ({ value: 4.2 + 0.06 * random.normal() + se * random.normal(), se, preparation: `p${i}` })))
      if (pooled.ok && pooled.interval![0] <= 4.2 && pooled.interval![1] >= 4.2) inside++
    }
    // Never narrower than the plain interval makes it err on the wide side.
    expect(inside / 1500).toBeGreaterThan(0.935)
    expect(inside / 1500).toBeLessThan(0.985)
  }, 60_000)
  it('refuse an empty list and an error of zero', () => {
    expect(poolReplicates([])).toMatchObject({ ok: false, reason: 'none' })
    expect(poolReplicates([{ value: 1, se: 0, preparation: 'a' }])).toMatchObject({ ok: false, reason: 'badError' })
  })
})

describe('concentration', () => {
  const coaxial = { temperature_K: 298.15, muEff: GD_MU_EFF, shape: 'parallel' } as const
  it('shifts by 0.11 ppm per mM of Gd at 298 K in a coaxial tube [Corsi et al. 2001, from memory]', () => {
    expect(susceptibilityShift_ppm(1, coaxial)).toBeCloseTo(0.11, 2)
    expect(susceptibilityShift_ppm(1, { ...coaxial, shape: 'perpendicular' })).toBeCloseTo(-0.055, 3)
  })
  it('goes with the SI susceptibility to the 0.9 % by which 2.84 is rounded [c·μ0·N·μB²·μ²/(3kT)·s]', () => {
    const chi = (1 * 1.25663706212e-6 * 6.02214076e23 * (9.2740100783e-24 * GD_MU_EFF) ** 2) / (3 * 1.380649e-23 * 298.15)
    expect(Math.abs(susceptibilityShift_ppm(1, coaxial) / ((1e6 * chi) / 3) - 1)).toBeLessThan(0.009)
  })
  it('comes back from the shift with its error, and not from a sphere', () => {
    const found = concentrationFromShift(susceptibilityShift_ppm(2.5, coaxial), 0.002, coaxial)!
    expect(found.conc_mM).toBeCloseTo(2.5, 12)
    expect(found.se_mM).toBeCloseTo(0.002 / susceptibilityShift_ppm(1, coaxial), 12)
    expect(concentrationFromShift(0.1, null, { ...coaxial, shape: 'sphere' })).toBeNull()
    expect(concentrationFromShift(0.1, null, { ...coaxial, temperature_K: 0 })).toBeNull()
  })
  it('comes from an elemental analysis: 1.5725 mg/L of Gd diluted 100 times is 1 mM [157.25 g/mol]', () => {
    const found = concentrationFromIcp({ mass_mg_per_L: 1.5725, massSe_mg_per_L: 0.015725, dilution: 100, dilutionSe_frac: 0.01, metal_g_per_mol: 157.25 })!
    expect(found.conc_mM).toBeCloseTo(1, 12)
    expect(found.se_mM).toBeCloseTo(Math.SQRT2 / 100, 12)
    expect(concentrationFromIcp({ mass_mg_per_L: 1, massSe_mg_per_L: null, dilution: 0.5, dilutionSe_frac: null, metal_g_per_mol: 157.25 })).toBeNull()
  })
})
