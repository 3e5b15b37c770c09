import { refuse } from '../least-squares/fitData'
import { defineModel } from './define'
import { PARAMETERS, SIGNAL_AXIS } from './recovery'

/**
 * Steady state of a spoiled gradient echo at several flip angles:
 *     S(α) = M0·sin(B·α)·(1 − E1)/(1 − E1·cos(B·α)),   E1 = exp(−TR/T1)
 * α is the nominal angle, B the B1 scale of the tube (true angle over nominal). The signal holds exp(−TE/T2*) in M0, which is fair only where TE is the same for all.
 * @source Fram et al., Magn. Reson. Imaging 5, 201 (1987)
 */
export const variableFlipAngle = defineModel({
  id: 'variableFlipAngle',
  version: 1,
  title: 'Variable flip angle, spoiled gradient echo',
  equation: 'S = M0·sin(B·α)·(1 − E1)/(1 − E1·cos(B·α)); E1 = exp(−TR/T1)',
  source: 'Fram et al., Magn. Reson. Imaging 5, 201 (1987)',
  x: { name: 'flip_rad', label: 'Flip angle', unit: 'rad', dimension: 'angle' },
  y: SIGNAL_AXIS,
  params: { m0_au: PARAMETERS.m0, t1_s: PARAMETERS.t1 },
  settings: {
    tr_s: { label: 'TR', unit: 's', dimension: 'time', min: 1e-5, max: 1e3, standard: null },
    b1Scale: { label: 'B1 scale', unit: '', dimension: 'none', min: 0.1, max: 3, standard: 1 },
  },
  valueAndGradient(flip_rad, p, settings, gradient) {
    const angle = flip_rad * settings.b1Scale!
    const { shape, slope } = steadyState(angle, settings.tr_s!, p[1]!)
    gradient[0] = shape
    gradient[1] = p[0]! * slope
    return p[0]! * shape
  },
  guess(flip_rad, signal_au, settings) {
    // The largest signal stands near Ernst's angle, where cos α = E1.
    const at = signal_au.reduce((best, value, i) => Math.abs(value) > Math.abs(signal_au[best]!) ? i : best, 0)
    const cosine = Math.min(Math.max(Math.cos(flip_rad[at]! * settings.b1Scale!), 1e-3), 1 - 1e-6)
    const t1_s = Math.min(Math.max(-settings.tr_s! / Math.log(cosine), PARAMETERS.t1.min), PARAMETERS.t1.max)
    const { shape } = steadyState(flip_rad[at]! * settings.b1Scale!, settings.tr_s!, t1_s)
    return { m0_au: Math.abs(signal_au[at]! / shape), t1_s }
  },
  refuse(flip_rad, settings) {
    const bad = flip_rad.findIndex(angle => !(angle > 0 && angle * settings.b1Scale! < Math.PI))
    if (bad < 0) return null
    return refuse('outOfDomain', `Point ${bad + 1}: a flip angle of ${Number((flip_rad[bad]! * 180 / Math.PI).toPrecision(4))}° gives no steady state that this model describes.`, 'Flip angles above 0° and below 180°, in degrees or radians as declared.')
  },
  separable: {
    nonlinear: 't1_s',
    linear: ['m0_au'],
    basis(flip_rad, t1_s, settings, phi) { phi[0] = steadyState(flip_rad * settings.b1Scale!, settings.tr_s!, t1_s).shape },
    range: () => [PARAMETERS.t1.min, PARAMETERS.t1.max],
    isUpright: linear => linear[0]! >= 0,
  },
  example: {
    x: [2, 4, 6, 9, 12, 16, 20, 25, 30].map(degrees => degrees * Math.PI / 180),
    settings: { tr_s: 0.015, b1Scale: 0.96 },
    truth: { m0_au: 9000, t1_s: 0.9 },
  },
})

/** Signal per M0 and its derivative by T1. */
function steadyState(angle_rad: number, tr_s: number, t1_s: number): { shape: number, slope: number } {
  const sine = Math.sin(angle_rad)
  const half = Math.sin(angle_rad / 2)
  const recovered = -Math.expm1(-tr_s / t1_s)
  const e1 = 1 - recovered
  // 1 − E1·cos α = (1 − E1) + E1·(1 − cos α), without the cancellation at small angles and short TR.
  const base = recovered + e1 * 2 * half * half
  const cosine = 1 - 2 * half * half
  return { shape: (sine * recovered) / base, slope: (sine * (cosine - 1) / (base * base)) * e1 * tr_s / (t1_s * t1_s) }
}
