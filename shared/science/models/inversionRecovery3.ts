import { defineModel } from './define'
import { PARAMETERS, SIGNAL_AXIS, TI_AXIS, guessRecovery, recoveryRange, refuseNegativeTimes } from './recovery'

/**
 * Signal after an inversion pulse of any quality:
 *     S(TI) = a + b·exp(−TI/T1)
 * a is the signal at full recovery, a + b the signal just after the pulse (b = −2a for a perfect one). Magnitude data must have their polarity
 * restored first (relaxometry/polarity).
 * @source Barral et al., Magn. Reson. Med. 64, 1057 (2010)
 */
export const inversionRecovery3 = defineModel({
  id: 'inversionRecovery3',
  version: 2,
  title: 'Inversion recovery, three parameters',
  equation: 'S = a + b·exp(−TI/T1)',
  source: 'Barral et al., Magn. Reson. Med. 64, 1057 (2010)',
  x: TI_AXIS,
  y: SIGNAL_AXIS,
  params: { a_au: PARAMETERS.a, b_au: PARAMETERS.b, t1_s: PARAMETERS.t1 },
  settings: {},
  valueAndGradient(ti_s, p, _settings, gradient) {
    const rate1_per_s = 1 / p[2]!
    const elapsed = ti_s * rate1_per_s
    const decay = Math.exp(-elapsed)
    const decaying = p[1]! * decay
    gradient[0] = 1
    gradient[1] = decay
    gradient[2] = decaying * elapsed * rate1_per_s
    return p[0]! + decaying
  },
  guess(ti_s, signal_au) {
    const { plateau, start, t1_s } = guessRecovery(ti_s, signal_au)
    return { a_au: plateau, b_au: start - plateau, t1_s }
  },
  refuse: refuseNegativeTimes,
  separable: {
    nonlinear: 't1_s',
    linear: ['a_au', 'b_au'],
    basis(ti_s, t1_s, _settings, phi) {
      phi[0] = 1
      phi[1] = Math.exp(-ti_s / t1_s)
    },
    range: recoveryRange,
    isUpright: linear => linear[1]! <= 0,
  },
  example: {
    x: [0.03, 0.06, 0.12, 0.2, 0.35, 0.5, 0.8, 1.2, 1.8, 2.6, 4, 6],
    settings: {},
    truth: { a_au: 1000, b_au: -1920, t1_s: 0.9 },
  },
})
