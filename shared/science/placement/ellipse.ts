/** Probability ellipses in log10 of loss (across) and log10 of working concentration (up). */
import type { EllipseParams } from './types'

/** χ² quantile with two degrees of freedom, exact: −2 ln(1 − p). */
export function chi2TwoQuantile(level: number): number {
  return -2 * Math.log1p(-level)
}

export interface LogCovariance {
  /** Variances and covariance of the natural logarithms. */
  readonly lossLoss: number
  readonly concConc: number
  readonly lossConc: number
}

/** The ellipse that holds `level` of a two-dimensional log-normal about (loss, conc). */
export function ellipseOf(centre: { loss_frac: number, conc_mM: number }, covariance: LogCovariance, level: 0.68 | 0.95): EllipseParams {
  const { lossLoss, concConc, lossConc } = covariance
  const mean = (lossLoss + concConc) / 2
  const half = Math.hypot((lossLoss - concConc) / 2, lossConc)
  const reach = Math.sqrt(chi2TwoQuantile(level)) / Math.LN10
  // a difference of equal numbers may fall just below zero
  const minor = Math.max(0, mean - half)
  return {
    centreLogLoss: Math.log10(centre.loss_frac), centreLogConc: Math.log10(centre.conc_mM),
    semiMajor_decades: reach * Math.sqrt(mean + half), semiMinor_decades: reach * Math.sqrt(minor),
    angle_rad: half === 0 ? 0 : 0.5 * Math.atan2(2 * lossConc, lossLoss - concConc),
    level,
  }
}

/** Sample covariance of ln(loss) and ln(conc) over draws. */
export function logCovarianceOf(lnLoss: ArrayLike<number>, lnConc: ArrayLike<number>): LogCovariance {
  const n = lnLoss.length
  let [meanLoss, meanConc] = [0, 0]
  for (let i = 0; i < n; i++) {
    meanLoss += lnLoss[i]! / n
    meanConc += lnConc[i]! / n
  }
  let [lossLoss, concConc, lossConc] = [0, 0, 0]
  for (let i = 0; i < n; i++) {
    const [a, b] = [lnLoss[i]! - meanLoss, lnConc[i]! - meanConc]
    lossLoss += a * a / (n - 1)
    concConc += b * b / (n - 1)
    lossConc += a * b / (n - 1)
  }
  return { lossLoss, concConc, lossConc }
}
