import { defineModel, type Settings } from './define'
import { INVERSION_ANGLE, PARAMETERS, SIGNAL_AXIS, TI_AXIS, guessRecovery, recoveryRange, refuseNegativeTimes } from './recovery'

/**
 * Inversion recovery repeated every TR from inversion to inversion, read out at 90°:
 *     S(TI) = M0·[1 − (1 − cos θ)·exp(−TI/T1) − cos θ·exp(−TR/T1)]
 * θ is the inversion angle, fixed or known.
 * @source Barral et al., Magn. Reson. Med. 64, 1057 (2010)
 */
export const inversionRecoveryTiRepeat = defineModel({
  id: 'inversionRecoveryTiRepeat',
  version: 1,
  title: 'Inversion recovery, constant repetition time',
  equation: 'S = M0·(1 − (1 − cos θ)·exp(−TI/T1) − cos θ·exp(−TR/T1))',
  source: 'Barral et al., Magn. Reson. Med. 64, 1057 (2010)',
  x: TI_AXIS,
  y: SIGNAL_AXIS,
  params: { m0_au: PARAMETERS.m0, t1_s: PARAMETERS.t1 },
  settings: {
    tr_s: { label: 'TR, inversion to inversion', unit: 's', dimension: 'time', min: 1e-3, max: 1e4, standard: null },
    theta_rad: INVERSION_ANGLE,
  },
  valueAndGradient(ti_s, p, settings, gradient) {
    const t1_s = p[1]!
    const cosine = Math.cos(settings.theta_rad!)
    const atTi = Math.exp(-ti_s / t1_s)
    const atTr = Math.exp(-settings.tr_s! / t1_s)
    const shape = 1 - (1 - cosine) * atTi - cosine * atTr
    gradient[0] = shape
    gradient[1] = (-p[0]! * ((1 - cosine) * atTi * ti_s + cosine * atTr * settings.tr_s!)) / (t1_s * t1_s)
    return p[0]! * shape
  },
  guess(ti_s, signal_au) {
    const { plateau, start, t1_s } = guessRecovery(ti_s, signal_au)
    return { m0_au: Math.max(Math.abs(plateau), Math.abs(start)), t1_s }
  },
  refuse(ti_s, { tr_s }: Settings) {
    const negative = refuseNegativeTimes(ti_s)
    if (negative) return negative
    const at = ti_s.findIndex(ti => ti > tr_s!)
    if (at < 0) return null
    return {
      ok: false, reason: 'impossibleTiming',
      message: `Point ${at + 1}: the inversion time ${ti_s[at]} s is longer than TR = ${tr_s} s from inversion to inversion. Is TR the delay after the read-out instead?`,
      accepted: 'TR of at least the longest inversion time, or the model with a constant delay after the read-out.',
    }
  },
  separable: {
    nonlinear: 't1_s',
    linear: ['m0_au'],
    basis(ti_s, t1_s, settings, phi) {
      const cosine = Math.cos(settings.theta_rad!)
      phi[0] = 1 - (1 - cosine) * Math.exp(-ti_s / t1_s) - cosine * Math.exp(-settings.tr_s! / t1_s)
    },
    range: recoveryRange,
    isUpright: linear => linear[0]! >= 0,
  },
  example: {
    x: [0.03, 0.06, 0.12, 0.2, 0.35, 0.5, 0.8, 1.2, 1.8, 2.4],
    settings: { tr_s: 2.5 },
    truth: { m0_au: 1000, t1_s: 0.9 },
  },
})
