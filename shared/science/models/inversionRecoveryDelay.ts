import { defineModel } from './define'
import { INVERSION_ANGLE, PARAMETERS, SIGNAL_AXIS, TI_AXIS, guessRecovery, recoveryRange, refuseNegativeTimes } from './recovery'

/**
 * Inversion recovery with a constant delay Td between the read-out (90°) and the next inversion:
 *     S(TI) = M0·[1 − (1 − cos θ·(1 − exp(−Td/T1)))·exp(−TI/T1)]
 * θ is the inversion angle, fixed or known.
 * @source Barral et al., Magn. Reson. Med. 64, 1057 (2010)
 */
export const inversionRecoveryDelay = defineModel({
  id: 'inversionRecoveryDelay',
  version: 1,
  title: 'Inversion recovery, constant delay after read-out',
  equation: 'S = M0·(1 − (1 − cos θ·(1 − exp(−Td/T1)))·exp(−TI/T1))',
  source: 'Barral et al., Magn. Reson. Med. 64, 1057 (2010)',
  x: TI_AXIS,
  y: SIGNAL_AXIS,
  params: { m0_au: PARAMETERS.m0, t1_s: PARAMETERS.t1 },
  settings: {
    td_s: { label: 'Delay from read-out to inversion', unit: 's', dimension: 'time', min: 1e-3, max: 1e4, standard: null },
    theta_rad: INVERSION_ANGLE,
  },
  valueAndGradient(ti_s, p, settings, gradient) {
    const t1_s = p[1]!
    const td_s = settings.td_s!
    const cosine = Math.cos(settings.theta_rad!)
    const atTi = Math.exp(-ti_s / t1_s)
    const atTd = Math.exp(-td_s / t1_s)
    const lost = 1 - cosine * (1 - atTd)
    gradient[0] = 1 - lost * atTi
    gradient[1] = (-p[0]! * atTi * (cosine * atTd * td_s + lost * ti_s)) / (t1_s * t1_s)
    return p[0]! * (1 - lost * atTi)
  },
  guess(ti_s, signal_au) {
    const { plateau, start, t1_s } = guessRecovery(ti_s, signal_au)
    return { m0_au: Math.max(Math.abs(plateau), Math.abs(start)), t1_s }
  },
  refuse: refuseNegativeTimes,
  separable: {
    nonlinear: 't1_s',
    linear: ['m0_au'],
    basis(ti_s, t1_s, settings, phi) {
      const ready = 1 - Math.exp(-settings.td_s! / t1_s)
      phi[0] = 1 - (1 - Math.cos(settings.theta_rad!) * ready) * Math.exp(-ti_s / t1_s)
    },
    range: recoveryRange,
    isUpright: linear => linear[0]! >= 0,
  },
  example: {
    x: [0.03, 0.06, 0.12, 0.2, 0.35, 0.5, 0.8, 1.2, 1.8, 2.6, 4],
    settings: { td_s: 1.5 },
    truth: { m0_au: 1000, t1_s: 0.9 },
  },
})
