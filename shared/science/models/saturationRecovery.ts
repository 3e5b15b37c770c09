import { defineModel, type ModelAxis } from './define'
import { PARAMETERS, SIGNAL_AXIS, guessRecovery, recoveryRange, refuseNegativeTimes } from './recovery'

const TR_AXIS: ModelAxis = { name: 'tr_s', label: 'TR', unit: 's', dimension: 'time' }
const SOURCE = 'Haacke et al., Magnetic Resonance Imaging: Physical Principles and Sequence Design (1999), chapter 8'
const EXAMPLE_TR_S = [0.05, 0.1, 0.2, 0.35, 0.6, 0.9, 1.4, 2.1, 3.2, 5]

/**
 * Signal after saturation and a recovery time TR (or saturation delay):
 *     S(TR) = a·[1 − exp(−TR/T1)]
 * @source textbook form; Haacke et al. (1999), chapter 8, from memory
 */
export const saturationRecovery = defineModel({
  id: 'saturationRecovery',
  version: 1,
  title: 'Saturation recovery',
  equation: 'S = a·(1 − exp(−TR/T1))',
  source: SOURCE,
  x: TR_AXIS,
  y: SIGNAL_AXIS,
  params: { a_au: PARAMETERS.m0, t1_s: PARAMETERS.t1 },
  settings: {},
  valueAndGradient(tr_s, p, _settings, gradient) {
    const t1_s = p[1]!
    const decay = Math.exp(-tr_s / t1_s)
    gradient[0] = 1 - decay
    gradient[1] = (-p[0]! * decay * tr_s) / (t1_s * t1_s)
    return p[0]! * (1 - decay)
  },
  guess(tr_s, signal_au) {
    const { plateau, t1_s } = guessRecovery(tr_s, signal_au)
    return { a_au: Math.abs(plateau), t1_s }
  },
  refuse: refuseNegativeTimes,
  separable: {
    nonlinear: 't1_s',
    linear: ['a_au'],
    basis(tr_s, t1_s, _settings, phi) { phi[0] = 1 - Math.exp(-tr_s / t1_s) },
    range: recoveryRange,
    isUpright: linear => linear[0]! >= 0,
  },
  example: { x: EXAMPLE_TR_S, settings: {}, truth: { a_au: 1000, t1_s: 0.9 } },
})

/**
 * Saturation recovery with a constant: a saturation that is not complete, or a base line.
 *     S(TR) = a·[1 − exp(−TR/T1)] + c
 * @source textbook form; Haacke et al. (1999), chapter 8, from memory
 */
export const saturationRecoveryOffset = defineModel({
  id: 'saturationRecoveryOffset',
  version: 1,
  title: 'Saturation recovery with offset',
  equation: 'S = a·(1 − exp(−TR/T1)) + c',
  source: SOURCE,
  x: TR_AXIS,
  y: SIGNAL_AXIS,
  params: { a_au: PARAMETERS.m0, t1_s: PARAMETERS.t1, c_au: PARAMETERS.c },
  settings: {},
  valueAndGradient(tr_s, p, _settings, gradient) {
    const t1_s = p[1]!
    const decay = Math.exp(-tr_s / t1_s)
    gradient[0] = 1 - decay
    gradient[1] = (-p[0]! * decay * tr_s) / (t1_s * t1_s)
    gradient[2] = 1
    return p[0]! * (1 - decay) + p[2]!
  },
  guess(tr_s, signal_au) {
    const { plateau, start, t1_s } = guessRecovery(tr_s, signal_au)
    return { a_au: Math.abs(plateau - start), t1_s, c_au: start }
  },
  refuse: refuseNegativeTimes,
  separable: {
    nonlinear: 't1_s',
    linear: ['a_au', 'c_au'],
    basis(tr_s, t1_s, _settings, phi) {
      phi[0] = 1 - Math.exp(-tr_s / t1_s)
      phi[1] = 1
    },
    range: recoveryRange,
    isUpright: linear => linear[0]! >= 0,
  },
  example: { x: EXAMPLE_TR_S, settings: {}, truth: { a_au: 1000, t1_s: 0.9, c_au: 60 } },
})
