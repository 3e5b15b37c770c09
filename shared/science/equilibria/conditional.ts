/**
 * Conditional constant and pM of one complex: side reactions of the ligand (protons), of the metal (mononuclear
 * hydroxides) and of the complex (protonated and hydroxo forms), with the 1:1 mass balance solved exactly.
 *
 * log K_cond = log K + log α_ML − log α_L(H) − log α_M.
 *
 * @source A. Ringbom, Complexation in Analytical Chemistry (Wiley, 1963); pM convention of K. N. Raymond and co-workers
 * (free metal at pH 7.4 with 1 µM metal and 10 µM ligand).
 */
import { log10Sum, logAlphaProton, overallFromStepwise } from './protonation'

export interface ComplexConstants {
  /** log10 of the stability constant of ML, M⁻¹. */
  readonly logK: number
  /** Stepwise log protonation constants of the ligand, most basic first. */
  readonly ligandProtonation: readonly number[]
  /** Stepwise log constants of ML + H, MLH + H …; empty where unknown or none. */
  readonly complexProtonation?: readonly number[]
  /** log10 *β of ML + j H₂O = ML(OH)_j + j H⁺ (negative numbers). */
  readonly complexHydroxide?: readonly number[]
  /** log10 *β of M + j H₂O = M(OH)_j + j H⁺ (negative numbers). */
  readonly metalHydroxide?: readonly number[]
}

export interface ConditionalConstant {
  readonly logKCond: number
  readonly logAlphaLigand: number
  readonly logAlphaMetal: number
  readonly logAlphaComplex: number
}

/** Side-reaction coefficient of a metal by its mononuclear hydroxides; `logBetaStar[j−1]` belongs to M(OH)_j. */
export function logAlphaHydroxide(logBetaStar: readonly number[], pcH: number): number {
  return log10Sum([0, ...logBetaStar.map((beta, j) => beta + (j + 1) * pcH)])
}

/** log K_cond at `pcH` with each side-reaction coefficient beside it. Not a finite number in, NaN out. */
export function conditionalConstant(complex: ComplexConstants, pcH: number): ConditionalConstant {
  const logAlphaLigand = logAlphaProton(complex.ligandProtonation, pcH)
  const logAlphaMetal = logAlphaHydroxide(complex.metalHydroxide ?? [], pcH)
  const logAlphaComplex = log10Sum([
    0,
    ...overallFromStepwise(complex.complexProtonation ?? []).map((beta, j) => beta - (j + 1) * pcH),
    ...(complex.complexHydroxide ?? []).map((beta, j) => beta + (j + 1) * pcH),
  ])
  return { logKCond: complex.logK + logAlphaComplex - logAlphaLigand - logAlphaMetal, logAlphaLigand, logAlphaMetal, logAlphaComplex }
}

/**
 * Metal not bound to the ligand, in mol/L, in a 1:1 mixture: the positive root of
 * K m² + (K (L − M) + 1) m − M = 0, written so that no two close numbers are subtracted.
 * Totals must not be negative; NaN otherwise.
 */
export function unboundMetal_M(kCond_per_M: number, metal_M: number, ligand_M: number): number {
  if (!(metal_M >= 0) || !(ligand_M >= 0) || !(kCond_per_M >= 0)) return NaN
  const b = kCond_per_M * (ligand_M - metal_M) + 1
  const root = Math.sqrt(b * b + 4 * kCond_per_M * metal_M)
  return b >= 0 ? (2 * metal_M) / (b + root) : (root - b) / (2 * kCond_per_M)
}

export interface PMConditions {
  readonly pcH: number
  readonly metal_M: number
  readonly ligand_M: number
}

/** The totals and the pH that pM is quoted at unless stated otherwise; always print them with the value. */
export const PM_CONVENTION: PMConditions = { pcH: 7.4, metal_M: 1e-6, ligand_M: 1e-5 }

/** pM = −log10 of the free aqua metal ion. */
export function pM(complex: ComplexConstants, conditions: PMConditions = PM_CONVENTION): number {
  const { logKCond, logAlphaMetal } = conditionalConstant(complex, conditions.pcH)
  const unbound = unboundMetal_M(10 ** logKCond, conditions.metal_M, conditions.ligand_M)
  return logAlphaMetal - Math.log10(unbound)
}

export interface ComplexErrors {
  readonly logK_se: number
  /** One per protonation constant; 0 for one that is taken as exact. */
  readonly ligandProtonation_se: readonly number[]
}

/**
 * pM with its standard error by propagation through numerical derivatives (independent errors).
 * `se` is null when the errors given do not match the constants one to one.
 */
export function pMWithError(complex: ComplexConstants, errors: ComplexErrors | null, conditions: PMConditions = PM_CONVENTION): { readonly value: number, readonly se: number | null } {
  const value = pM(complex, conditions)
  if (errors === null || errors.ligandProtonation_se.length !== complex.ligandProtonation.length) return { value, se: null }
  const step = 1e-4
  const shifted = (index: number, by: number): number => pM(
    index < 0
      ? { ...complex, logK: complex.logK + by }
      : { ...complex, ligandProtonation: complex.ligandProtonation.map((k, j) => (j === index ? k + by : k)) },
    conditions,
  )
  let variance = 0
  for (const [index, se] of [errors.logK_se, ...errors.ligandProtonation_se].entries()) {
    if (se === 0) continue
    const slope = (shifted(index - 1, step) - shifted(index - 1, -step)) / (2 * step)
    variance += (slope * se) ** 2
  }
  return { value, se: Math.sqrt(variance) }
}
