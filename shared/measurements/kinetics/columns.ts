import type { ColumnSpec } from '../types'
import { TUBE_COLUMNS } from '../relaxation/columns'

/** Columns that name a tube and what is in it, in the words of kinetics. */
export const COURSE_TUBE_COLUMNS: readonly ColumnSpec[] = TUBE_COLUMNS.map((spec) => {
  if (spec.stem === 'tube') return { ...spec, label: 'Flask', help: 'Name or number of the flask or course', synonyms: ['flask', 'course', 'run', 'experiment', 'kinetic run', ...spec.synonyms] }
  if (spec.stem === 'conc') return { ...spec, label: 'Complex', help: 'Concentration of the complex', synonyms: [...spec.synonyms, 'complex', 'complex concentration', 'concentration of complex', 'concentration of the complex', 'c complex', '[complex]', '[gdl]'] }
  return spec
})

const total = (stem: string, field: string, label: string, synonyms: readonly string[]): ColumnSpec => ({
  stem, field, label, dimension: 'concentration', role: 'aux', required: false, min: 0, max: 20_000, parts: true, help: `${label} in the flask; empty where there is none`, synonyms,
})

/** What a flask holds and how warm it is: a column of a long table, or a row that says it of every flask. */
export const FLASK_COLUMNS: readonly ColumnSpec[] = [
  total('acid', 'acid_mM', 'Acid', ['acid', 'acid concentration', 'acid conc', 'c acid', 'h+', '[h+]', '[h]', 'hcl', 'hclo4', 'hno3', '[hcl]', '[hclo4]', 'c hcl', 'c h+', 'proton', 'protons', 'strong acid']),
  { stem: 'ph', field: 'pH', label: 'pH', dimension: 'none', role: 'aux', required: false, min: -1, max: 14, parts: true, help: 'Where the acid is a buffer: pH at the temperature measured', synonyms: ['ph', 'ph value', 'measured ph', 'p[h]', 'pc h'] },
  total('zn', 'zn_mM', 'Zinc', ['zn', 'zinc', 'zn2+', '[zn]', '[zn2+]', 'zn(ii)', 'c zn', 'zncl2', 'zn total', 'zinc concentration']),
  total('cu', 'cu_mM', 'Copper', ['cu', 'copper', 'cu2+', '[cu]', '[cu2+]', 'cu(ii)', 'c cu', 'cucl2', 'cu total', 'copper concentration']),
  total('ca', 'ca_mM', 'Calcium', ['ca', 'calcium', 'ca2+', '[ca]', '[ca2+]', 'ca(ii)', 'c ca', 'cacl2', 'ca total', 'calcium concentration']),
  {
    stem: 'temperature', field: 'temperature_K', label: 'Temperature', dimension: 'temperature', role: 'aux', required: false, parts: true, help: 'Of the flask, where it is not that of all',
    synonyms: ['temperature', 'temp', 't', 'bath temperature', 'flask temperature'],
  },
]

export const TIME_COLUMN: ColumnSpec = {
  stem: 'time', field: 'time_s', label: 'Time', dimension: 'time', role: 'x', required: true, min: 0, help: 'Since mixing; s, min, h or d',
  synonyms: ['time', 't', 'reaction time', 'elapsed time', 'elapsed', 'time since mixing', 'time after mixing', 'incubation', 'incubation time', 'age'],
}

const SIGNAL_WORDS = ['signal', 'absorbance', 'abs', 'od', 'relaxation rate', 'r1', 'r2', 'r1 obs', 'r1p', '1/t1', 'rate1', 'peak area', 'area', 'integral', 'peak height', 'fluorescence', 'luminescence', 'emission', 'intensity', 'activity', 'counts', 'cpm', 'value', 'reading']

/** Points of a course: time, signal, its error, and the ends where they are known. */
export const COURSE_COLUMNS: readonly ColumnSpec[] = [
  ...COURSE_TUBE_COLUMNS, TIME_COLUMN,
  { stem: 'signal', field: 'signal_au', label: 'Signal', dimension: 'signal', role: 'y', required: true, help: 'Anything proportional to the share left or lost', synonyms: SIGNAL_WORDS },
  {
    stem: 'signalSd', field: 'signalSd_au', label: 'Signal, SD', dimension: 'signal', role: 'sigma', required: false, above: 0, follows: 'signal', help: 'Standard deviation of one reading',
    synonyms: ['sd', 'se', 'sigma', 'error', 'std', 'stdev', 'standard deviation', 'standard error', 'uncertainty', 'signal sd', 'signal se', 'signal error', 'sd signal'],
  },
  ...FLASK_COLUMNS,
  { stem: 'end', field: 'end_au', label: 'End value', dimension: 'signal', role: 'aux', required: false, help: 'Signal after complete reaction, where it is known', synonyms: ['end', 'end value', 'final', 'final value', 'end signal', 'final signal', 'infinity', 'y inf', 'y infinity', 'y∞', 'signal infinity', 'plateau'] },
  { stem: 'start', field: 'start_au', label: 'Start value', dimension: 'signal', role: 'aux', required: false, help: 'Signal at time zero, where it is known; with the end it allows an initial rate', synonyms: ['start', 'start value', 'initial', 'initial value', 'start signal', 'initial signal', 'y0', 'signal 0'] },
]

/** A table of rates: a row for each, with its conditions. */
export const RATE_COLUMNS: readonly ColumnSpec[] = [
  ...COURSE_TUBE_COLUMNS,
  { stem: 'k', field: 'rate_per_s', label: 'Rate', dimension: 'rate', role: 'y', required: true, above: 0, help: 'First-order rate constant k_{obs}', synonyms: ['k', 'kobs', 'k obs', 'k,obs', 'k_obs', 'rate', 'rate constant', 'kd', 'k d', 'kdis', 'k dis', 'observed rate', 'observed rate constant', 'pseudo first order rate constant'] },
  {
    stem: 'kSe', field: 'rateSe_per_s', label: 'Rate, standard error', dimension: 'rate', role: 'sigma', required: false, above: 0, follows: 'k', help: 'Standard error of the rate',
    synonyms: ['se', 'sd', 'error', 'sigma', 'std', 'standard error', 'standard deviation', 'uncertainty', '±', 'k se', 'k sd', 'kobs se', 'kobs sd', 'se k', 'sd k', 'se kobs', 'sd kobs', 'k error', 'kobs error', 'dk'],
  },
  ...FLASK_COLUMNS,
]
