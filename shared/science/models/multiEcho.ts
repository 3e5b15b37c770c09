import { defineModel } from './define'
import { decayRange, ECHO_PARAMETERS, EXAMPLE_TE_S, guessDecay, tailOf, TE_AXIS } from './echo'
import { refuseNegativeTimes, SIGNAL_AXIS } from './recovery'

const SOURCE = 'Meiboom & Gill, Rev. Sci. Instrum. 29, 688 (1958)'

/**
 * Echoes of a refocused train:
 *     S(TE) = a·exp(−TE/T2)
 * @source Meiboom & Gill, Rev. Sci. Instrum. 29, 688 (1958)
 */
export const multiEcho = defineModel({
  id: 'multiEcho',
  version: 2,
  title: 'Multi-echo decay',
  equation: 'S = a·exp(−TE/T2)',
  source: SOURCE,
  x: TE_AXIS,
  y: SIGNAL_AXIS,
  params: { a_au: ECHO_PARAMETERS.a, t2_s: ECHO_PARAMETERS.t2 },
  settings: {},
  valueAndGradient(te_s, p, _settings, gradient) {
    const rate2_per_s = 1 / p[1]!
    const elapsed = te_s * rate2_per_s
    const decay = Math.exp(-elapsed)
    const signal = p[0]! * decay
    gradient[0] = decay
    gradient[1] = signal * elapsed * rate2_per_s
    return signal
  },
  guess: (te_s, signal_au) => guessDecay(te_s, signal_au),
  refuse: refuseNegativeTimes,
  separable: {
    nonlinear: 't2_s',
    linear: ['a_au'],
    basis(te_s, t2_s, _settings, phi) { phi[0] = Math.exp(-te_s / t2_s) },
    range: decayRange,
    isUpright: linear => linear[0]! >= 0,
  },
  example: { x: EXAMPLE_TE_S, settings: {}, truth: { a_au: 1000, t2_s: 0.09 } },
})

/**
 * Decay to a constant: stray signal, or a base line that is not the noise floor (for that see the noise-floor models).
 *     S(TE) = a·exp(−TE/T2) + c
 * @source Meiboom & Gill, Rev. Sci. Instrum. 29, 688 (1958)
 */
export const multiEchoOffset = defineModel({
  id: 'multiEchoOffset',
  version: 1,
  title: 'Multi-echo decay with offset',
  equation: 'S = a·exp(−TE/T2) + c',
  source: SOURCE,
  x: TE_AXIS,
  y: SIGNAL_AXIS,
  params: { a_au: ECHO_PARAMETERS.a, t2_s: ECHO_PARAMETERS.t2, c_au: ECHO_PARAMETERS.c },
  settings: {},
  valueAndGradient(te_s, p, _settings, gradient) {
    const t2_s = p[1]!
    const decay = Math.exp(-te_s / t2_s)
    gradient[0] = decay
    gradient[1] = (p[0]! * decay * te_s) / (t2_s * t2_s)
    gradient[2] = 1
    return p[0]! * decay + p[2]!
  },
  guess(te_s, signal_au) {
    const c_au = tailOf(te_s, signal_au)
    return { ...guessDecay(te_s, signal_au, c_au), c_au }
  },
  refuse: refuseNegativeTimes,
  separable: {
    nonlinear: 't2_s',
    linear: ['a_au', 'c_au'],
    basis(te_s, t2_s, _settings, phi) {
      phi[0] = Math.exp(-te_s / t2_s)
      phi[1] = 1
    },
    range: decayRange,
    isUpright: linear => linear[0]! >= 0,
  },
  example: { x: EXAMPLE_TE_S, settings: {}, truth: { a_au: 1000, t2_s: 0.07, c_au: 25 } },
})
