import { chi2UpperP, fUpperP } from '../statistics'

/** A relaxivity with the parts of its error. */
export interface SlopeWithErrors {
  readonly value: number
  /** From the line: scatter of the rates and of each tube's own concentration. */
  readonly fitSe: number
  /** Relative standard error that the stock gives; 0 for none. */
  readonly scale_frac: number
  /** Names the stock: slopes of one stock share its error. */
  readonly stock: string
  /** Degrees of freedom behind `fitSe`; null where it is as good as known. */
  readonly dof: number | null
}

export interface Agreement {
  /** Generalised least-squares mean. */
  readonly common: number
  readonly commonSe: number
  readonly f: number
  readonly dof1: number
  readonly dof2: number | null
  /** Probability of a scatter this large if all relaxivities were one. */
  readonly p: number
}

/**
 * Whether several relaxivities are one, all their errors counted: V holds the error of each line on its diagonal and that of a stock wherever two slopes share it,
 * Q = (b − μ)ᵀV⁻¹(b − μ) with the common value μ by generalised least squares. Q/(k − 1) is held against F where the errors of the lines rest on few tubes.
 *
 * Beside the analysis of covariance, which asks whether the lines as measured are parallel: two stocks assayed to 2 % make lines that are not, of one relaxivity.
 * @returns null with fewer than two slopes, or where an error is not above 0
 * @source Aitken, Proc. R. Soc. Edinb. 55, 42 (1935), generalised least squares
 */
export function testAgreement(slopes: readonly SlopeWithErrors[]): Agreement | null {
  if (slopes.length < 2 || slopes.some(one => !(one.fitSe > 0) || !Number.isFinite(one.value))) return null
  // The size of the common error is taken at the mean, so that a slope that came out high is not given a larger error for it.
  const mean = slopes.reduce((sum, one) => sum + one.value, 0) / slopes.length
  const covariance = slopes.map((a, i) => slopes.map((b, j) => (i === j ? a.fitSe ** 2 : 0) + (a.stock === b.stock ? mean ** 2 * a.scale_frac * b.scale_frac : 0)))
  const ones = solve(covariance, slopes.map(() => 1))
  const values = solve(covariance, slopes.map(one => one.value))
  if (!ones || !values) return null
  const information = ones.reduce((sum, value) => sum + value, 0)
  const common = values.reduce((sum, value) => sum + value, 0) / information
  const q = slopes.reduce((sum, one, i) => sum + (one.value - common) * (values[i]! - common * ones[i]!), 0)
  const dof1 = slopes.length - 1
  const dof2 = slopes.every(one => one.dof !== null) ? slopes.reduce((sum, one) => sum + one.dof!, 0) : null
  const f = q / dof1
  return { common, commonSe: 1 / Math.sqrt(information), f, dof1, dof2, p: dof2 === null ? chi2UpperP(q, dof1) : fUpperP(f, dof1, dof2) }
}

/** Gaussian elimination with pivots; null where the matrix is singular. */
function solve(matrix: readonly (readonly number[])[], right: readonly number[]): number[] | null {
  const rows = matrix.map((row, i) => [...row, right[i]!])
  const n = rows.length
  for (let c = 0; c < n; c++) {
    const pivot = rows.slice(c).reduce((best, row, k) => Math.abs(row[c]!) > Math.abs(rows[best]![c]!) ? c + k : best, c)
    if (!(Math.abs(rows[pivot]![c]!) > 0)) return null
    ;[rows[c], rows[pivot]] = [rows[pivot]!, rows[c]!]
    for (let r = c + 1; r < n; r++) {
      const factor = rows[r]![c]! / rows[c]![c]!
      for (let k = c; k <= n; k++) rows[r]![k]! -= factor * rows[c]![k]!
    }
  }
  const x = new Array<number>(n).fill(0)
  for (let r = n - 1; r >= 0; r--) x[r] = (rows[r]![n]! - x.reduce((sum, value, k) => k > r ? sum + rows[r]![k]! * value : sum, 0)) / rows[r]![r]!
  return x
}
