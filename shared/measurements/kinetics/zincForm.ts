import type { ColumnSpec, Conditions, ConditionSpec, Flag } from '../types'
import { COURSE_TUBE_COLUMNS, TIME_COLUMN } from './columns'
import { COMPLEX_CONDITION, METHOD_CONDITIONS } from './conditions'

const errorWords = (...names: string[]): string[] => ['se', 'sd', 'error', 'std', 'standard error', 'standard deviation', 'uncertainty', '±', ...names.flatMap(name => [`${name} se`, `${name} sd`, `${name} error`, `se ${name}`, `sd ${name}`])]

export const ZINC_COLUMNS: readonly ColumnSpec[] = [
  ...COURSE_TUBE_COLUMNS, TIME_COLUMN,
  { stem: 'r1', field: 'rate1_per_s', label: 'R1', dimension: 'rate', role: 'y', required: false, above: 0, bare: true, help: 'Relaxation rate of the mixture', synonyms: ['r1', '1/t1', 'r1 obs', 'r1,obs', 'r1obs', 'relaxation rate', 'rate', 'r1 relaxation rate'] },
  { stem: 'r1p', field: 'rate1Para_per_s', label: 'R1p', dimension: 'rate', role: 'y', required: false, above: 0, help: 'R1 less that of the buffer', synonyms: ['r1p', 'r1 p', 'r1,p', 'paramagnetic rate', 'paramagnetic r1', 'r1 para'] },
  { stem: 't1', field: 't1_s', label: 'T1', dimension: 'time', role: 'y', required: false, above: 0, help: 'Relaxation time of the mixture', synonyms: ['t1', 't1 obs', 't1 relaxation time', 'relaxation time'] },
  { stem: 'r1Se', field: 'rate1Se_per_s', label: 'R1, standard error', dimension: 'rate', role: 'sigma', required: false, above: 0, bare: true, follows: 'r1', help: 'Standard error of the rate', synonyms: errorWords('r1', 'rate') },
  { stem: 'r1pSe', field: 'rate1ParaSe_per_s', label: 'R1p, standard error', dimension: 'rate', role: 'sigma', required: false, above: 0, follows: 'r1p', help: 'Standard error of the rate', synonyms: errorWords('r1p') },
  { stem: 't1Se', field: 't1Se_s', label: 'T1, standard error', dimension: 'time', role: 'sigma', required: false, above: 0, follows: 't1', help: 'Standard error of the time', synonyms: errorWords('t1') },
]

const amount = (key: string, label: string, help: string, synonyms: readonly string[]): ConditionSpec => ({ key, label, type: 'number', dimension: 'concentration', shownUnit: 'mM', required: true, min: 1e-6, max: 1000, help, synonyms })

export const ZINC_CONDITIONS: readonly ConditionSpec[] = [
  { key: 'b0_T', label: 'Field', type: 'number', dimension: 'field', shownUnit: 'MHz', required: true, min: 0.0001, max: 30, help: 'Proton frequency or tesla; the published protocol has 20 MHz', synonyms: ['field', 'b0', 'proton frequency', 'larmor frequency', 'frequency', 'field strength', 'magnetic field'] },
  { key: 'temperature_K', label: 'Temperature', type: 'number', dimension: 'temperature', shownUnit: '°C', sdKey: 'temperatureSd_K', required: true, min: 250, max: 400, help: '37 °C in the published protocol', synonyms: ['temperature', 'temp', 'sample temperature'] },
  { key: 'temperatureSd_K', label: 'Temperature, SD', type: 'number', shownUnit: 'K', dimension: 'none', required: false, min: 0, max: 20, help: 'Spread over the course', synonyms: ['temperature sd', 'sd of temperature'] },
  { key: 'pH', label: 'pH', type: 'number', required: true, min: -1, max: 14, help: '7.0 in the published protocol', synonyms: ['ph', 'ph value'] },
  { ...COMPLEX_CONDITION, required: true, help: '2.5 mM in the published protocol' },
  amount('zinc_mM', 'Zinc added', '2.5 mM in the published protocol', ['zinc', 'zn', 'zinc added', 'zncl2', 'metal added', 'zn2+']),
  amount('phosphate_mM', 'Phosphate', '67 mM in the published protocol', ['phosphate', 'phosphate buffer', 'total phosphate']),
  { key: 'rate1Dia_per_s', label: 'R1 of the buffer', type: 'number', dimension: 'rate', shownUnit: 's^-1', required: true, min: 0.001, max: 50, help: 'Without complex, at the same field and temperature', synonyms: ['r1dia', 'r1 dia', 'r1 diamagnetic', 'diamagnetic rate', 'r1 of the buffer', 'r1 buffer', 'r1 blank', 'blank r1', 'r1 without the complex', 'r1d'] },
  {
    key: 'measuredOn', label: 'Measured on', type: 'choice', required: true, help: 'Only a complex whose own R1p is large can be followed', synonyms: ['measured on', 'complex measured'],
    choices: [{ value: 'itself', label: 'the complex itself', synonyms: ['itself', 'complex', 'own'] }, { value: 'analogue', label: 'its gadolinium analogue', synonyms: ['analogue', 'gadolinium analogue', 'gd analogue'] }],
  },
  { key: 'buffer', label: 'Buffer', type: 'text', required: false, help: 'As prepared: 26 mM KH2PO4 and 41 mM Na2HPO4, for instance', synonyms: ['buffer'] },
  ...METHOD_CONDITIONS,
]

/**
 * The protocol by which published ratios compare, and how far off a condition still counts as it (common practice, no source, for the widths).
 * @source S. Laurent, L. Vander Elst, F. Copoix, R. N. Muller, Invest. Radiol. 36, 115 (2001), from memory
 */
const PROTOCOL: readonly { key: string, label: string, value: number, within: number, shown: (value: number) => string }[] = [
  { key: 'complexConc_mM', label: 'complex', value: 2.5, within: 0.13, shown: value => `${short(value)} mM` },
  { key: 'zinc_mM', label: 'zinc', value: 2.5, within: 0.13, shown: value => `${short(value)} mM` },
  { key: 'phosphate_mM', label: 'phosphate', value: 67, within: 3.4, shown: value => `${short(value)} mM` },
  { key: 'pH', label: 'pH', value: 7, within: 0.15, shown: value => short(value) },
  { key: 'temperature_K', label: 'temperature', value: 310.15, within: 1, shown: value => `${short(value - 273.15)} °C` },
  { key: 'b0_T', label: 'proton frequency', value: 0.46973, within: 0.024, shown: value => `${short(value * 42.577478461)} MHz` },
]
const short = (value: number): string => String(Number(value.toPrecision(4)))

/** Where a measurement departs from the published protocol. */
export function protocolFlags(conditions: Conditions): Flag[] {
  const off = PROTOCOL.flatMap(({ key, label, value, within, shown }) => {
    const own = conditions[key]
    return typeof own === 'number' && Math.abs(own - value) > within ? [`${label} ${shown(own)}, not ${shown(value)}`] : []
  })
  return off.length === 0 ? [] : [{ id: 'otherProtocol', title: 'Not the published protocol', sentence: `${off.join('; ')}. Published ratios compare only under the same conditions; compare this one with itself, or measure again as published.`, tubeNo: null }]
}
