import { formatCelsius, formatDuration, formatNumber } from '../../format'
import type { EvidenceDraft } from '../types'
import { draftOf, noteField, pHField, temperatureField, writeStored } from './common'
import { defineRecord, type NumberField, type RecordContext, type RecordProblem } from './define'
import type { RecordEntry } from './entry'
import { choiceIn, conditionsOf, quantityIn } from './values'

const millimolar = (key: string, label: string): NumberField => ({
  type: 'number', key, label, required: true, group: 'Conditions', dimension: 'concentration', stored: 'mM', units: ['mM', 'M', 'µM'], min: 0, isAbove: true, max: 1000,
})

/** Only a complex whose own R1p is large enough can be followed; for the others a gadolinium analogue is measured and said so. */
function check(entry: RecordEntry, { metal }: RecordContext): RecordProblem[] {
  const problems: RecordProblem[] = []
  if (entry.ratioAt72h === undefined && entry.timeTo080 === undefined) problems.push({ field: 'ratioAt72h', message: 'One of the two values is needed.', accepted: 'the ratio at 72 h, or the time to 0.80, or both' })
  if (metal !== 'Gd' && choiceIn(entry, 'measuredOn') === 'itself') {
    problems.push({ field: 'measuredOn', message: `The paramagnetic rate of a ${metal} complex is too small to follow.`, accepted: 'its gadolinium analogue' })
  }
  return problems
}

/** "Not reached" stays a bound: a time to 0.80 is never extrapolated. */
function emits(entry: RecordEntry): EvidenceDraft[] {
  const conditions = conditionsOf(zincPhosphate, entry)
  const detail: EvidenceDraft['detail'] = { isAnalogue: choiceIn(entry, 'measuredOn') === 'analogue', at_s: 259_200 }
  const ratio = quantityIn(zincPhosphate, entry, 'ratioAt72h')
  const time = quantityIn(zincPhosphate, entry, 'timeTo080')
  return [
    ...(ratio ? [draftOf({ quantity: 'zincPhosphateRatio', stored: ratio, conditions, detail })] : []),
    ...(time ? [draftOf({ quantity: 'zincPhosphateTime080_s', stored: time, conditions, isPositive: true, detail: { isAnalogue: detail.isAnalogue ?? false } })] : []),
  ]
}

function summarise(entry: RecordEntry): string {
  const ratio = quantityIn(zincPhosphate, entry, 'ratioAt72h')
  const time = quantityIn(zincPhosphate, entry, 'timeTo080')
  return [
    ratio ? `ratio at 72 h ${writeStored(ratio)}` : '',
    time ? (time.kind === '>' ? `0.80 not reached in ${formatDuration(time.value)}` : `0.80 after ${time.kind === '<' ? 'less than ' : ''}${formatDuration(time.value)}`) : '',
  ].filter(Boolean).join('; ')
}

/**
 * Loss of paramagnetic relaxation rate in zinc and phosphate.
 * Version 2: the rate without the complex may be missing, as in most publications.
 * @source Laurent et al., Invest. Radiol. 36, 115 (2001)
 */
export const zincPhosphate = defineRecord({
  kind: 'zincPhosphateRatio', version: 2, title: 'Zinc and phosphate', subject: 'complex',
  purpose: 'The share of the paramagnetic rate R_{1p} that is left in zinc and phosphate, after 72 h or as the time to 0.80.',
  fields: [
    { type: 'quantity', key: 'ratioAt72h', label: 'R_{1p}(72 h) / R_{1p}(0)', required: false, group: 'Value', dimension: null, stored: '', units: [''], min: 0, max: 1.2, bounds: ['=', '<', '>'] },
    {
      type: 'quantity', key: 'timeTo080', label: 'Time to 0.80', help: 'Not reached: choose "more than" and give the time watched. It is never extrapolated.', required: false, group: 'Value',
      dimension: 'time', stored: 's', units: ['h', 'min', 'd', 's'], min: 0, isAbove: true, max: 1e8, bounds: ['=', '<', '>'],
    },
    {
      type: 'choice', key: 'measuredOn', label: 'Measured on', required: true, group: 'Value',
      options: [{ value: 'itself', label: 'the complex itself' }, { value: 'analogue', label: 'its gadolinium analogue' }],
    },
  ],
  conditions: [
    { type: 'number', key: 'b0_T', label: 'Field', required: true, group: 'Conditions', dimension: 'field', stored: 'T', units: ['MHz', 'T'], min: 0.0001, max: 30 },
    { type: 'number', key: 'rate1Dia_per_s', label: 'R_1 without the complex', help: 'Left empty where a source does not print it.', required: false, group: 'Conditions', dimension: 'rate', stored: 's^-1', units: ['s^-1'], min: 0, isAbove: true, max: 50 },
    millimolar('complex_mM', 'Complex'), millimolar('zinc_mM', 'Zinc added'), millimolar('phosphate_mM', 'Phosphate'), pHField, temperatureField,
    { type: 'text', key: 'buffer', label: 'Buffer', required: true, group: 'Conditions', most: 120 }, noteField,
  ],
  check,
  emits,
  summarise,
  describe: ({ zinc_mM, phosphate_mM, pH, temperature_K }) => [
    typeof zinc_mM === 'number' && typeof phosphate_mM === 'number' ? `${formatNumber(zinc_mM)} mM Zn, ${formatNumber(phosphate_mM)} mM phosphate` : '',
    typeof pH === 'number' ? `pH ${formatNumber(pH)}` : '', typeof temperature_K === 'number' ? formatCelsius(temperature_K, 0) : '',
  ].filter(Boolean).join(', '),
})
