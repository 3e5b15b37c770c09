import { ellipseOf } from '../../shared/science/placement/ellipse'
import type { EllipseParams } from '../../shared/science/placement/types'

/** Numbers from 0 to 1 that are the same in every run (mulberry32). */
export function makeRandom(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6D2B79F5) >>> 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

/** Share of normal draws that fall inside an ellipse made for their own covariance. */
export function chiSquareShare(shape: Pick<EllipseParams, 'semiMajor_decades' | 'semiMinor_decades' | 'angle_rad' | 'level'>, random: () => number, n: number): number {
  const [a, b] = [shape.semiMajor_decades, shape.semiMinor_decades]
  const [cos, sin] = [Math.cos(shape.angle_rad), Math.sin(shape.angle_rad)]
  const covariance = { lossLoss: (a * cos) ** 2 + (b * sin) ** 2, concConc: (a * sin) ** 2 + (b * cos) ** 2, lossConc: (a * a - b * b) * sin * cos }
  const ellipse = ellipseOf({ loss_frac: 1, conc_mM: 1 }, covariance, shape.level)
  let inside = 0
  for (let i = 0; i < n; i++) {
    const radius = Math.sqrt(-2 * Math.log(1 - random()))
    const turn = 2 * Math.PI * random()
    const [u, v] = [a * radius * Math.cos(turn), b * radius * Math.sin(turn)]
    const [x, y] = [(u * cos - v * sin) / Math.LN10, (u * sin + v * cos) / Math.LN10]
    const [c, s] = [Math.cos(ellipse.angle_rad), Math.sin(ellipse.angle_rad)]
    if (((x * c + y * s) / ellipse.semiMajor_decades) ** 2 + ((-x * s + y * c) / ellipse.semiMinor_decades) ** 2 <= 1) inside++
  }
  return inside / n
}
