/**
 * End points of a strong acid and base run from its straight branches: before the end (V0 + V)·10^(E/s) falls to zero at it, after it
 * (V0 + V)·10^(−E/s) rises from zero.
 * @source G. Gran, Analyst 77, 661 (1952)
 */
import { fitLine } from '../least-squares/line'

export interface StrongRun {
  /** Strong acid in the vessel, mmol. */
  readonly acid_mmol: number
  readonly vessel_mL: number
  /** Strong base added. */
  readonly volumes_mL: readonly number[]
  readonly readings_mV: readonly number[]
}

export interface GranEnd {
  readonly end_mL: number
  /** Null with two points. */
  readonly se_mL: number | null
  readonly points: number
}

/** End point from one branch; null where the branch has fewer than three points or does not cross zero. */
export function granEnd(run: StrongRun, slope_mV: number, branch: 'acid' | 'base'): GranEnd | null {
  const jump = steepest_mL(run)
  const chosen = run.volumes_mL.map((_, i) => i).filter(i => branch === 'acid' ? run.volumes_mL[i]! < 0.95 * jump : run.volumes_mL[i]! > 1.05 * jump)
  if (chosen.length < 3) return null
  const sign = branch === 'acid' ? 1 : -1
  const top = Math.max(...chosen.map(i => sign * run.readings_mV[i]! / slope_mV))
  const x = chosen.map(i => run.volumes_mL[i]!)
  const y = chosen.map(i => (run.vessel_mL + run.volumes_mL[i]!) * 10 ** (sign * run.readings_mV[i]! / slope_mV - top))
  // the error of 10^(E/s) is in proportion to itself
  const line = fitLine({ x, y, sigma: y })
  if (!line.ok || line.slope === 0) return null
  const end_mL = -line.intercept / line.slope
  if (!(end_mL > 0)) return null
  const { slopeSe, interceptSe, covariance } = line
  const known = slopeSe !== null && interceptSe !== null && covariance !== null
  // σ of each point is in proportion, not known: the scatter about the line decides
  const scale = Math.sqrt(line.rss / Math.max(1, line.dof)) / Math.max(1, Math.sqrt(line.rss / Math.max(1, line.dof)))
  const variance = known ? interceptSe ** 2 + 2 * end_mL * covariance + (end_mL * slopeSe) ** 2 : 0
  return { end_mL, se_mL: known ? scale * Math.sqrt(Math.max(0, variance)) / Math.abs(line.slope) : null, points: chosen.length }
}

/** Middle of the interval where the reading moves fastest with volume. */
export function steepest_mL({ volumes_mL, readings_mV }: StrongRun): number {
  let best = 0
  let steepest = 0
  for (let i = 1; i < volumes_mL.length; i++) {
    const steep = Math.abs((readings_mV[i]! - readings_mV[i - 1]!) / (volumes_mL[i]! - volumes_mL[i - 1]!))
    if (steep > best && Number.isFinite(steep)) {
      best = steep
      steepest = (volumes_mL[i]! + volumes_mL[i - 1]!) / 2
    }
  }
  return steepest
}

/** Carbonate in the base, mol/L, from the two ends: as acid meets it, carbonate takes two protons; in the alkaline branch none. May come out negative within its error. */
export function carbonateFromEnds(acid_mmol: number, acidEnd_mL: number, baseEnd_mL: number): number {
  return (acid_mmol / acidEnd_mL - acid_mmol / baseEnd_mL) / 2
}
