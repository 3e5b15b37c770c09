import { defineModel, type ModelAxis } from './define'
import { PARAMETERS, SIGNAL_AXIS, guessRecovery, recoveryRange, refuseNegativeTimes } from './recovery'

const TIME_AXIS: ModelAxis = { name: 'ti_s', label: 'Time after inversion', unit: 's', dimension: 'time' }

/**
 * Signal of a train of small read-out pulses after one inversion, which drives the recovery to its end with T1* < T1:
 *     S(t) = a − b·exp(−t/T1*),   T1 = T1*·(b/a − 1)
 * The relation holds for a good inversion and pulses of small angle closely spaced.
 * @source Deichmann & Haase, J. Magn. Reson. 96, 608 (1992)
 */
export const lookLocker = defineModel({
  id: 'lookLocker',
  version: 1,
  title: 'Look–Locker, three parameters',
  equation: 'S = a − b·exp(−t/T1*); T1 = T1*·(b/a − 1)',
  source: 'Deichmann & Haase, J. Magn. Reson. 96, 608 (1992)',
  x: TIME_AXIS,
  y: SIGNAL_AXIS,
  params: { a_au: PARAMETERS.a, b_au: PARAMETERS.b, t1Star_s: { ...PARAMETERS.t1, label: 'T1*' } },
  settings: {},
  valueAndGradient(t_s, p, _settings, gradient) {
    const t1Star_s = p[2]!
    const decay = Math.exp(-t_s / t1Star_s)
    gradient[0] = 1
    gradient[1] = -decay
    gradient[2] = (-p[1]! * decay * t_s) / (t1Star_s * t1Star_s)
    return p[0]! - p[1]! * decay
  },
  guess(t_s, signal_au) {
    const { plateau, start, t1_s } = guessRecovery(t_s, signal_au)
    return { a_au: plateau, b_au: plateau - start, t1Star_s: t1_s }
  },
  refuse: refuseNegativeTimes,
  separable: {
    nonlinear: 't1Star_s',
    linear: ['a_au', 'b_au'],
    basis(t_s, t1Star_s, _settings, phi) {
      phi[0] = 1
      phi[1] = -Math.exp(-t_s / t1Star_s)
    },
    range: recoveryRange,
    isUpright: linear => linear[1]! >= 0,
  },
  derived: [{
    name: 't1_s', label: 'T1', unit: 's',
    // A plateau of 0 or below, or b up to a, describes no inversion: then there is no T1.
    value: p => p[0]! > 0 && p[1]! > p[0]! ? p[2]! * (p[1]! / p[0]! - 1) : NaN,
    gradient: p => [(-p[2]! * p[1]!) / (p[0]! * p[0]!), p[2]! / p[0]!, p[1]! / p[0]! - 1],
  }],
  example: {
    x: [0.03, 0.08, 0.15, 0.25, 0.4, 0.6, 0.85, 1.2, 1.6, 2.2, 3],
    settings: {},
    truth: { a_au: 620, b_au: 1550, t1Star_s: 0.55 },
  },
})
