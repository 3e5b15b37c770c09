/**
 * Saturation form of the rate law with its derivative for each constant.
 */
import type { RateConstantName } from './rateTerms'

export type ConstantValues = Readonly<Partial<Record<RateConstantName, number>>>

export interface RateGradient {
  readonly value: number
  /** ∂k/∂ln(constant), s⁻¹. */
  readonly relative: Partial<Record<RateConstantName, number>>
}

/** k_obs = (k0 + k1·K_H[H] + k3·K_M[M]) / (1 + K_H[H] + K_M[M]); constants not given count as absent pathways. */
export function rateGradient(values: ConstantValues, hydrogen_M: number, metal_M: number): RateGradient {
  const k0 = values.k0_per_s ?? 0
  const k1 = values.k1_per_s ?? 0
  const k3 = values.k3_per_s ?? 0
  const protonated = (values.kProton_per_M ?? 0) * hydrogen_M
  const binuclear = (values.kMetal_per_M ?? 0) * metal_M
  const denominator = 1 + protonated + binuclear
  const value = (k0 + k1 * protonated + k3 * binuclear) / denominator
  return {
    value,
    relative: {
      k0_per_s: k0 / denominator,
      k1_per_s: k1 * protonated / denominator,
      k3_per_s: k3 * binuclear / denominator,
      kProton_per_M: protonated * (k1 - value) / denominator,
      kMetal_per_M: binuclear * (k3 - value) / denominator,
    },
  }
}
