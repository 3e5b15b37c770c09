import { checkRecoveryTubes, RECOVERY_COLUMNS, RECOVERY_CONDITIONS } from './relaxation/recoveryForm'
import { recoveryFlags, recoveryModelFor } from './relaxation/recoveryFlags'
import { signalKind } from './relaxation/kinds'
import { proposeRecovery } from './relaxation/propose'
import { settingsFrom } from './relaxation/settings'
import type { SignalKind } from './relaxation/signalTubes'
import { INVERSION_FLAGS } from '../science/relaxometry/tubeFlags'
import { RECOVERY_TEMPLATES } from './templates/recovery'
import { defineMeasurement } from './types'

/** How tubes of inversion recoveries are fitted. */
export const INVERSION_SIGNALS: SignalKind = {
  x: 'ti_s', y: ['signal_au'], time: 't1_s', rate: { name: 'rate1_per_s', label: 'R_1' }, flags: INVERSION_FLAGS, knowsBlank: true,
  settings: settingsFrom({ tr_s: 'tr_s', td_s: 'td_s', theta_rad: 'inversionAngle_rad' }),
  signal: (_model, { signalForm }) => signalForm === 'magnitude' ? 'magnitude' : 'signed',
}

/** T1 by inversion recovery: a phantom of tubes, inversion times, signed or magnitude signals. */
export const relaxT1Ir = defineMeasurement(signalKind({
  kind: 'relax.t1.ir',
  version: 1,
  title: 'T1, inversion recovery',
  purpose: 'Signals of a phantom against inversion time, signed or magnitude; gives T1 of every tube and r1.',
  digit: '1',
  columns: RECOVERY_COLUMNS,
  conditions: RECOVERY_CONDITIONS,
  templates: RECOVERY_TEMPLATES,
  models: [
    { id: 'inversionRecovery3' }, { id: 'inversionRecoveryTiRepeat', within: ['inversionRecovery3'] }, { id: 'inversionRecoveryDelay', within: ['inversionRecovery3'] },
  ],
  defaultModel: recoveryModelFor,
  checkTubes: checkRecoveryTubes,
  propose: proposeRecovery,
  words: {
    token: 't1', tube: { x: { label: 'TI', unit: 's' }, y: { label: 'Signal', unit: 'au' } }, rate: { label: 'R_1', unit: 's^-1' },
    caption: 'Where the signals are magnitudes, their signs are restored.',
  },
  signals: INVERSION_SIGNALS,
  flags: recoveryFlags,
  sequenceText: () => 'inversion recovery',
  formText: ({ conditions }) => conditions.signalForm === 'magnitude' ? 'magnitudes, polarity restored by the smallest residual sum of squares (Barral et al. 2010)' : 'signed signals',
  sampling: { plural: 'inversion times', unit: 's', per: 1 },
}))
