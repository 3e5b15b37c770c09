import type { FitOptionSpec } from '../types'

/** Draws of the residual bootstrap: enough for the ends of a 95 % interval to hold still to a few per cent of its width. */
export const BOOTSTRAP_DRAWS = 999

export const INTERVAL_OPTION: FitOptionSpec = {
  key: 'interval', label: 'Interval', type: 'choice', standard: 'studentT', help: 'Where the sum of squares is not a parabola, the profile is the truer one; the standard errors stay as they are',
  choices: [
    { value: 'studentT', label: 'value ± Student t times SE' }, { value: 'profile', label: 'profile of the sum of squares' },
    { value: 'bootstrap', label: `residual bootstrap, ${BOOTSTRAP_DRAWS} draws` },
  ],
}

export const SKIP_ECHOES_OPTION: FitOptionSpec = {
  key: 'skipEchoes', label: 'First echoes left out', type: 'integer', min: 0, max: 64, standard: 0, help: 'Of every tube: the first echoes read high or low where refocusing is imperfect',
}

export const NOISE_OPTION: FitOptionSpec = {
  key: 'noiseSigma', label: 'Noise of one pixel', type: 'choice', standard: 'measured', models: ['multiEchoNoiseFloor', 'multiEchoMeanSquares'],
  help: 'Measured needs the SD of the background among the conditions; where it is not given, the noise is fitted',
  choices: [{ value: 'measured', label: 'measured in the background, if given' }, { value: 'fitted', label: 'fitted with each tube' }],
}

export const LINE_OPTION: FitOptionSpec = {
  key: 'line', label: 'Line through the rates', type: 'choice', standard: 'straight', help: 'With protein in the medium rates can bend; the isotherm needs the protein\'s concentration among the conditions and stands beside the straight line',
  choices: [{ value: 'straight', label: 'straight line' }, { value: 'binding', label: 'straight line, and a binding isotherm beside it' }],
}
