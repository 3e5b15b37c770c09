/**
 * The terms that a rate law can have, declared once: name, unit, label and what the constant is multiplied by.
 *
 * Sum form:        k_obs = k0 + k1[H] + k2[H]² + Σ k_M[M] + Σ k_MH[M][H]
 * Saturation form: k_obs = (k0 + k1·K_H[H] + k3·K_M[M]) / (1 + K_H[H] + K_M[M]), where k0, k1 and k3 are in s⁻¹.
 *
 * @source É. Tóth, E. Brücher, I. Lázár, I. Tóth, Inorg. Chem. 33, 4070 (1994); L. Sarka, L. Burai, E. Brücher, Chem. Eur. J. 6, 719 (2000).
 */

import { exactExp } from '../exactMath'

export type CompetitorMetal = 'Zn' | 'Cu' | 'Ca'

export interface RateConditions {
  /** Taken as −log10 [H⁺]; the reading of an electrode differs by about 0.1 at I = 0.15 M. */
  readonly pH: number
  readonly temperature_K: number
  /** Exchangeable competitors, mol/L. */
  readonly competitors_M: Readonly<Partial<Record<CompetitorMetal, number>>>
}

export interface RateTerm {
  readonly label: string
  readonly unit: string
  readonly words: string
  /** Competing metal that the term needs. */
  readonly metal: CompetitorMetal | null
  readonly factor: (conditions: RateConditions) => number
}

/** [H⁺] in mol/L; by our own exp, so that draws have the same bits everywhere. */
export const hydrogen_M = (pH: number): number => exactExp(-pH * Math.LN10)
const hydrogen = (c: RateConditions): number => hydrogen_M(c.pH)
const metal = (name: CompetitorMetal) => (c: RateConditions): number => c.competitors_M[name] ?? 0

export const RATE_TERMS = {
  k0_per_s: { label: 'k0', unit: 's⁻¹', words: 'spontaneous', metal: null, factor: () => 1 },
  k1_per_M_s: { label: 'k1', unit: 'M⁻¹ s⁻¹', words: 'proton-assisted', metal: null, factor: hydrogen },
  k2_per_M2_s: { label: 'k2', unit: 'M⁻² s⁻¹', words: 'assisted by two protons', metal: null, factor: c => hydrogen(c) * hydrogen(c) },
  kZn_per_M_s: { label: 'k(Zn)', unit: 'M⁻¹ s⁻¹', words: 'zinc-assisted', metal: 'Zn', factor: metal('Zn') },
  kCu_per_M_s: { label: 'k(Cu)', unit: 'M⁻¹ s⁻¹', words: 'copper-assisted', metal: 'Cu', factor: metal('Cu') },
  kCa_per_M_s: { label: 'k(Ca)', unit: 'M⁻¹ s⁻¹', words: 'calcium-assisted', metal: 'Ca', factor: metal('Ca') },
  kZnH_per_M2_s: { label: 'k(ZnH)', unit: 'M⁻² s⁻¹', words: 'assisted by zinc and a proton', metal: 'Zn', factor: c => metal('Zn')(c) * hydrogen(c) },
  kCuH_per_M2_s: { label: 'k(CuH)', unit: 'M⁻² s⁻¹', words: 'assisted by copper and a proton', metal: 'Cu', factor: c => metal('Cu')(c) * hydrogen(c) },
} as const satisfies Record<string, RateTerm>

export type SumConstant = keyof typeof RATE_TERMS
export const SUM_CONSTANTS = Object.keys(RATE_TERMS) as SumConstant[]

/** Constants of the saturation form, with units. `kMetal_per_M` and `k3_per_s` belong to the metal that the law names. */
export const SATURATION_CONSTANTS = {
  k0_per_s: { label: 'k0', unit: 's⁻¹' },
  k1_per_s: { label: 'k1', unit: 's⁻¹' },
  kProton_per_M: { label: 'K(H)', unit: 'M⁻¹' },
  k3_per_s: { label: 'k3', unit: 's⁻¹' },
  kMetal_per_M: { label: 'K(M)', unit: 'M⁻¹' },
} as const
export type SaturationConstant = keyof typeof SATURATION_CONSTANTS

export type RateConstantName = SumConstant | SaturationConstant
export const RATE_CONSTANT_NAMES = [...new Set<RateConstantName>([...SUM_CONSTANTS, ...Object.keys(SATURATION_CONSTANTS) as SaturationConstant[]])]

/** Which form a set of constants belongs to: a binding constant of the complex means saturation. */
export function rateFormOf(names: readonly string[]): 'sum' | 'saturation' {
  return ['kProton_per_M', 'kMetal_per_M', 'k1_per_s', 'k3_per_s'].some(name => names.includes(name)) ? 'saturation' : 'sum'
}
