import { ECHO_FLAGS } from '../science/relaxometry/tubeFlags'
import { signalKind } from './relaxation/kinds'
import { proposeEchoes } from './relaxation/propose'
import { checkEchoTubes, ECHO_COLUMNS, ECHO_CONDITIONS, echoFlags, skippedEchoes } from './relaxation/echoForm'
import { pixelSigma } from './relaxation/noise'
import { optionOf } from './fitOptions'
import { NOISE_OPTION, SKIP_ECHOES_OPTION } from './relaxation/options'
import { settingsFrom } from './relaxation/settings'
import { findModel } from '../science/models'
import { ECHO_TEMPLATES } from './templates/echo'
import { defineMeasurement } from './types'

/** T2 by multi-echo: signals of a refocused train, region means or mean squares. */
export const relaxT2Echo = defineMeasurement(signalKind({
  kind: 'relax.t2.echo',
  version: 1,
  title: 'T2, multi-echo',
  purpose: 'Signals of a phantom against echo time; gives T2 of every tube and r2.',
  digit: '2',
  columns: ECHO_COLUMNS,
  conditions: ECHO_CONDITIONS,
  templates: ECHO_TEMPLATES,
  models: [
    { id: 'multiEcho', within: ['multiEchoOffset'] }, { id: 'multiEchoOffset' }, { id: 'multiEchoNoiseFloor' }, { id: 'multiEchoMeanSquares' },
  ],
  defaultModel: ({ signalForm }) => signalForm === 'meanSquares' ? 'multiEchoMeanSquares' : 'multiEcho',
  options: [SKIP_ECHOES_OPTION, NOISE_OPTION],
  checkTubes: checkEchoTubes,
  propose: proposeEchoes,
  words: { token: 't2', tube: { x: { label: 'TE', unit: 's' }, y: { label: 'Signal', unit: 'au' } }, rate: { label: 'R_2', unit: 's^-1' }, caption: '' },
  signals: {
    x: 'te_s', y: ['signal_au', 'meanSquare_au2'], time: 't2_s', rate: { name: 'rate2_per_s', label: 'R_2' }, flags: ECHO_FLAGS, knowsBlank: false,
    settings: settingsFrom({ channels: 'channels' }),
    signal: model => model.id === 'multiEchoMeanSquares' ? 'meanSquares' : 'signed',
    fixed: (model, input) => {
      const measured = pixelSigma(input.conditions)
      return measured !== null && model.names.includes('sigma_au') && optionOf(input, NOISE_OPTION) === 'measured' ? { sigma_au: measured } : undefined
    },
    skipped: skippedEchoes,
    offsetModel: model => model.id === 'multiEcho' ? findModel('multiEchoOffset') : null,
  },
  flags: echoFlags,
  sequenceText: ({ conditions: { echoSpacing_s, refocusingAngle_rad } }) => `a multi-echo train${typeof echoSpacing_s === 'number' ? `, echo spacing ${Number((1e3 * echoSpacing_s).toPrecision(4))} ms` : ''}`
    + `${typeof refocusingAngle_rad === 'number' ? `, refocusing ${Number((refocusingAngle_rad * 180 / Math.PI).toPrecision(4))}°` : ''}`,
  sampling: { plural: 'echo times', unit: 'ms', per: 1e3 },
}))
