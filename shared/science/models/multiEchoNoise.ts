import { refuse } from '../least-squares/fitData'
import { scaledBessel } from '../bessel'
import { defineModel } from './define'
import { ECHO_PARAMETERS, EXAMPLE_TE_S, guessDecay, tailOf, TE_AXIS } from './echo'
import { refuseNegativeTimes, SIGNAL_AXIS } from './recovery'

/** Mean of Rayleigh's distribution in units of σ: what magnitudes of pure noise read on average. */
export const RAYLEIGH_MEAN = Math.sqrt(Math.PI / 2)

/**
 * Mean magnitude of a signal A in Gaussian noise of σ in each of two channels (Rice's distribution), and its derivatives:
 *     S̄ = σ·√(π/2)·L½(−A²/2σ²)
 * With u = A²/4σ²: S̄ = σ·√(π/2)·[(1 + 2u)·Ĩ₀(u) + 2u·Ĩ₁(u)], ∂S̄/∂A = √(π/2)·√u·[Ĩ₀(u) + Ĩ₁(u)], Ĩ scaled by e^−u. For σ = 0 it is |A|.
 * @source Koay & Basser, J. Magn. Reson. 179, 317 (2006)
 */
export function meanMagnitude(amplitude: number, sigma: number): { mean: number, byAmplitude: number, bySigma: number } {
  if (sigma === 0) return { mean: Math.abs(amplitude), byAmplitude: Math.sign(amplitude), bySigma: 0 }
  const root = amplitude / (2 * sigma)
  const u = root * root
  const { i0, i1 } = scaledBessel(u)
  const mean = sigma * RAYLEIGH_MEAN * (i0 + 2 * u * (i0 + i1))
  const byAmplitude = RAYLEIGH_MEAN * root * (i0 + i1)
  // S̄ is homogeneous of degree 1 in A and σ.
  return { mean, byAmplitude, bySigma: RAYLEIGH_MEAN * i0 }
}

/**
 * Standard deviation of a magnitude: √(A² + 2σ² − S̄²), which falls from σ to 0.655 σ where the signal sinks into the noise.
 * @source second moment of Rice's distribution; Koay & Basser, J. Magn. Reson. 179, 317 (2006)
 */
export function spreadOfMagnitude(amplitude: number, sigma: number): number {
  // From about 60 σ on the difference of squares is all rounding, and the spread is σ to four digits.
  if (amplitude > 60 * sigma) return sigma
  const { mean } = meanMagnitude(amplitude, sigma)
  return Math.sqrt(amplitude * amplitude + 2 * sigma * sigma - mean * mean)
}

/**
 * Mean magnitude over a region, noise floor included:
 *     S̄(TE) = σ·√(π/2)·L½(−A²/2σ²),   A = a·exp(−TE/T2)
 * σ is that of one pixel in one channel: measured beside the tubes (SD of background magnitudes over 0.655) or fitted.
 * @source Koay & Basser, J. Magn. Reson. 179, 317 (2006)
 */
export const multiEchoNoiseFloor = defineModel({
  id: 'multiEchoNoiseFloor',
  version: 2,
  title: 'Multi-echo decay with noise floor, region means',
  equation: 'S = σ·√(π/2)·L½(−A²/2σ²); A = a·exp(−TE/T2)',
  source: 'Koay & Basser, J. Magn. Reson. 179, 317 (2006)',
  x: TE_AXIS,
  y: SIGNAL_AXIS,
  params: { a_au: ECHO_PARAMETERS.a, t2_s: ECHO_PARAMETERS.t2, sigma_au: ECHO_PARAMETERS.sigma },
  settings: {},
  valueAndGradient(te_s, p, _settings, gradient) {
    const t2_s = p[1]!
    const decay = Math.exp(-te_s / t2_s)
    const { mean, byAmplitude, bySigma } = meanMagnitude(p[0]! * decay, p[2]!)
    gradient[0] = byAmplitude * decay
    gradient[1] = (byAmplitude * p[0]! * decay * te_s) / (t2_s * t2_s)
    gradient[2] = bySigma
    return mean
  },
  guess(te_s, signal_au) {
    const floor = Math.max(0, tailOf(te_s, signal_au))
    return { ...guessDecay(te_s, signal_au, 0.9 * floor), sigma_au: floor / RAYLEIGH_MEAN }
  },
  refuse: refuseNegativeTimes,
  separable: null,
  example: { x: EXAMPLE_TE_S, settings: {}, truth: { a_au: 1000, t2_s: 0.045, sigma_au: 30 } },
})

/**
 * Mean of the squared magnitudes over a region, which noise moves by a constant:
 *     ⟨S²⟩(TE) = A² + 2N·σ²,   A = a·exp(−TE/T2), N summed channels
 * Only for squares averaged before the mean was taken; squared region means are not these.
 * @source Miller & Joseph, Magn. Reson. Imaging 11, 1051 (1993)
 */
export const multiEchoMeanSquares = defineModel({
  id: 'multiEchoMeanSquares',
  version: 1,
  title: 'Multi-echo decay, mean squares',
  equation: '⟨S²⟩ = A² + 2N·σ²; A = a·exp(−TE/T2)',
  source: 'Miller & Joseph, Magn. Reson. Imaging 11, 1051 (1993)',
  x: TE_AXIS,
  y: { name: 'meanSquare_au2', label: 'Mean square', unit: 'au^2', dimension: 'signal' },
  params: { a_au: ECHO_PARAMETERS.a, t2_s: ECHO_PARAMETERS.t2, sigma_au: ECHO_PARAMETERS.sigma },
  settings: { channels: { label: 'Summed channels', unit: '', dimension: 'none', min: 1, max: 128, standard: 1 } },
  valueAndGradient(te_s, p, settings, gradient) {
    const t2_s = p[1]!
    const amplitude = p[0]! * Math.exp(-te_s / t2_s)
    const square = amplitude * amplitude
    gradient[0] = p[0]! === 0 ? 0 : (2 * square) / p[0]!
    gradient[1] = (2 * square * te_s) / (t2_s * t2_s)
    gradient[2] = 4 * settings.channels! * p[2]!
    return square + 2 * settings.channels! * p[2]! * p[2]!
  },
  guess(te_s, square_au2, settings) {
    const floor = Math.max(0, tailOf(te_s, square_au2))
    const { a_au, t2_s } = guessDecay(te_s, square_au2, 0.9 * floor)
    const half = { a_au: Math.sqrt(a_au), t2_s: Math.min(2 * t2_s, ECHO_PARAMETERS.t2.max) }
    return { ...half, sigma_au: Math.sqrt(floor / (2 * settings.channels!)) }
  },
  refuse(te_s, _settings) {
    return refuseNegativeTimes(te_s)
  },
  separable: null,
  example: { x: EXAMPLE_TE_S, settings: { channels: 1 }, truth: { a_au: 1000, t2_s: 0.045, sigma_au: 30 } },
})

/** Squares are never negative. */
export function refuseNegativeSquares(square_au2: readonly number[]) {
  const bad = square_au2.findIndex(value => value < 0)
  return bad < 0 ? null : refuse('outOfDomain', `Point ${bad + 1}: a mean square of ${square_au2[bad]} is negative.`, 'Mean squares of 0 or more.')
}
