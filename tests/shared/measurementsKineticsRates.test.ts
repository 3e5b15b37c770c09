import { describe, expect, it } from 'vitest'
import { kineticsRates as kind } from '#shared/measurements/kinetics/rates'
import { halfLifeOf } from '#shared/science/kinetics/firstOrder'
import { evaluateRateLaw, type RateConstant } from '#shared/science/kinetics/rateLaw'
import type { SumConstant } from '#shared/science/kinetics/rateTerms'
import { eyringRatio } from '#shared/science/kinetics/eyring'
import { createRandom } from '#shared/science/random'
import { blocking, done, evidenceOf, inputFrom, readAs, SOLUTION } from '../support/kineticsTables'

const LINES = SOLUTION.slice(1)
const ACIDS_M = [0.05, 0.1, 0.2, 0.35, 0.5, 0.75, 1]
const table = (head: string, rows: readonly (readonly (string | number)[])[], lines: readonly string[] = LINES): string[] => [...lines, '', head, ...rows.map(row => row.join(','))]
const noisy = (seed: string, k1: number): number[] => {
  const random = createRandom(seed)
  return ACIDS_M.map(acid => k1 * acid * (1 + 0.03 * random.normal()))
}

/** Half-life at pH 7.4 and 25 °C as the placement would read this evidence. */
function atPlasma(evidence: ReturnType<typeof evidenceOf>) {
  const constants = Object.values(evidence).map((draft): RateConstant => ({
    name: draft.quantity as SumConstant, value: draft.value.value, kind: draft.value.kind, se: draft.value.se, temperature_K: 298.15, pHMin: Number(draft.detail.pHMin), pHMax: Number(draft.detail.pHMax),
    enthalpy_kJ_per_mol: null, enthalpy_se_kJ_per_mol: null, evidenceId: draft.quantity,
  }))
  const rate = evaluateRateLaw({ form: 'sum', constants }, { pH: 7.4, temperature_K: 298.15, competitors_M: {} })
  if (!rate.ok) throw new Error(rate.message)
  return { half: halfLifeOf(rate), decades: rate.decadesExtrapolated }
}

describe('rates fitted elsewhere', () => {
  it('0.05 to 1 M acid with 3 % noise gives a half-life at pH 7.4 as "at least", never thousands of years [methods, section 6]', () => {
    for (let i = 0; i < 10; i++) {
      const k = noisy(`table-${i}`, 2e-5)
      const { half, decades } = atPlasma(evidenceOf(kind, inputFrom(kind, table('acid (M),k (1/s)', ACIDS_M.map((acid, j) => [acid, k[j]!])))))
      expect(half.kind).toBe('>')
      expect(half.value / 31_557_600).toBeLessThan(50)
      expect(decades).toBeCloseTo(7.4 + Math.log10(0.05), 3)
    }
  })

  it('reads rows, a column per rate, hours and days to the same law', () => {
    const k = noisy('forms', 2e-5)
    const se = k.map(one => one * 0.03)
    const reference = evidenceOf(kind, inputFrom(kind, table('acid (M),kobs (1/s),SE', ACIDS_M.map((acid, j) => [acid, k[j]!, se[j]!]))))
    const others = [
      table('flask,acid (mM),kobs (1/h),SE kobs (1/h)', ACIDS_M.map((acid, j) => [`f${j}`, acid * 1000, k[j]! * 3600, se[j]! * 3600])),
      table('pH,k obs (1/d),SE (1/d)', ACIDS_M.map((acid, j) => [-Math.log10(acid), k[j]! * 86_400, se[j]! * 86_400])),
      [...LINES, '', ['flask', ...ACIDS_M.map((_, j) => `f${j}`)].join(','), ['acid (M)', ...ACIDS_M].join(','), ['k (1/s)', ...k].join(','), ['SE (1/s)', ...se].join(',')],
    ]
    for (const lines of others) {
      const evidence = evidenceOf(kind, inputFrom(kind, lines))
      for (const name of ['k0_per_s', 'k1_per_M_s']) expect(evidence[name]!.value.value / reference[name]!.value.value).toBeCloseTo(1, 6)
    }
    expect(reference.k1_per_M_s!.value.se! / reference.k1_per_M_s!.value.value).toBeLessThan(0.05)
  })

  it('several temperatures and metals in one table: one enthalpy, each metal its term', () => {
    const random = createRandom('both')
    const rows = [25, 37, 50].flatMap(celsius => [0.001, 0.005, 0.02].flatMap(acid => [0, 10, 30].map((cu) => {
      const k = (1e-3 * acid + 5e-4 * cu / 1000) * eyringRatio(70, 298.15, celsius + 273.15) * (1 + 0.02 * random.normal())
      return [acid, cu, celsius, k, k * 0.02]
    })))
    const evidence = evidenceOf(kind, inputFrom(kind, table('acid (M),Cu (mM),temperature (°C),k (1/s),SE', rows)))
    expect(Math.abs(evidence.k1_per_M_s!.value.value - 1e-3)).toBeLessThan(3.5 * evidence.k1_per_M_s!.value.se!)
    expect(Math.abs(evidence.kCu_per_M_s!.value.value - 5e-4)).toBeLessThan(3.5 * evidence.kCu_per_M_s!.value.se!)
    expect(Number(evidence.kCu_per_M_s!.detail.enthalpy_kJ_per_mol) / 70).toBeCloseTo(1, 1)
    expect(evidence.kCu_per_M_s!.detail).toEqual(evidence.k1_per_M_s!.detail)
  })

  it('levels off with acid: rate and protonation constant, form and bound named [K_H of [Gd(HP-DO3A)], Inorg. Chem. 32, 587 (1993): 240 M⁻¹, stored abstract]', () => {
    const random = createRandom('level off')
    const rows = [1e-4, 3e-4, 1e-3, 2e-3, 4e-3, 8e-3, 2e-2, 5e-2].map(acid => [acid, 1e-3 * 240 * acid / (1 + 240 * acid) * (1 + 0.01 * random.normal())])
    const input = inputFrom(kind, table('acid (M),k (1/s)', rows), { modelId: 'rateLawSaturation' })
    const evidence = evidenceOf(kind, input)
    expect(Math.abs(evidence.kProton_per_M!.value.value - 240)).toBeLessThan(4 * evidence.kProton_per_M!.value.se!)
    expect(evidence.k1_per_s!.detail.form).toBe('saturation')
    expect(evidence.k0_per_s!.value.kind).toBe('<')
    expect(done(kind, input).flags.map(flag => flag.id)).toContain('boundInSaturation')
    const straight = inputFrom(kind, table('acid (M),k (1/s)', ACIDS_M.map((acid, i) => [acid, noisy('line', 2e-5)[i]!])), { modelId: 'rateLawSaturation' })
    expect(kind.analyse(straight)).toMatchObject({ ok: false, reason: 'doesNotLevelOff' })
  })

  it('refuses a law from two rates, and stops rates that are not above zero', () => {
    expect(kind.analyse(inputFrom(kind, table('acid (M),k (1/s)', [[0.1, 1e-6], [1, 1e-5]])))).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(blocking(readAs(kind, table('acid (M),k (1/s)', [[0.1, 1e-6], [0.5, 0], [1, 1e-5]])))).toContain('outOfDomain')
    expect(blocking(readAs(kind, table('flask,k (1/s)', [['a', 1e-6]])))).toContain('noAcid')
  })

  it('leaves out a row with its reason, and keeps it in the figure', () => {
    const k = noisy('out', 2e-5)
    k[3]! *= 3
    const input = inputFrom(kind, table('acid (M),k (1/s)', ACIDS_M.map((acid, j) => [acid, k[j]!])))
    const left = { ...input, exclusions: [{ tubeNo: 4, pointIndex: null, reason: 'Evaporated over the weekend.' }] }
    const outcome = done(kind, left)
    expect(outcome.series.points.filter(point => point.excluded !== null)).toHaveLength(1)
    expect(kind.seriesFigure(outcome)!.layers.map(layer => layer.type)).toContain('cross')
    expect(outcome.method).toContain('Evaporated')
    expect(kind.evidence(outcome, left)[0]!.detail.nRatesLeftOut).toBe(1)
  })

  it('understands its template, but for what is still to be filled in', () => {
    const understood = readAs(kind, [kind.templates[0]!.text.replaceAll('\r\n', '\n')])
    expect(understood.tubes).toHaveLength(5)
    expect([...new Set(blocking(understood))]).toEqual(['noPoints'])
  })
})
