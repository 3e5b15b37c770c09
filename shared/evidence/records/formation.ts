import { formatCelsius, formatDuration, formatNumber } from '../../format'
import type { EvidenceDraft } from '../types'
import { describeMedium, draftOf, ionicStrengthField, mediumField, noteField, pHField, temperatureField, writeStored } from './common'
import { defineRecord, type RecordProblem } from './define'
import type { RecordEntry } from './entry'
import { conditionsOf, quantityIn } from './values'

function check(entry: RecordEntry): RecordProblem[] {
  const problems: RecordProblem[] = []
  if (!entry.rateOH && !entry.time99) problems.push({ field: 'rateOH', message: 'One of the two values is needed.', accepted: 'the rate constant with hydroxide, or the time to 99 %, or both' })
  if (entry.time99 && !entry.pH) problems.push({ field: 'pH', message: 'A time to 99 % means nothing without its pH.', accepted: 'the pH of the solution' })
  if (entry.time99 && !entry.excess) problems.push({ field: 'excess', message: 'A time to 99 % means nothing without the excess of ligand.', accepted: 'moles of ligand per mole of metal, 1 or more' })
  return problems
}

function emits(entry: RecordEntry): EvidenceDraft[] {
  const conditions = conditionsOf(formation, entry)
  const [rateOH, time99] = [quantityIn(formation, entry, 'rateOH'), quantityIn(formation, entry, 'time99')]
  return [
    ...(rateOH ? [draftOf({ quantity: 'kOH_per_M_s', stored: rateOH, conditions, isPositive: true })] : []),
    ...(time99 ? [draftOf({ quantity: 'formationTime99_s', stored: time99, conditions, isPositive: true })] : []),
  ]
}

function summarise(entry: RecordEntry): string {
  const [rateOH, time99] = [quantityIn(formation, entry, 'rateOH'), quantityIn(formation, entry, 'time99')]
  const { pH } = conditionsOf(formation, entry)
  return [
    rateOH ? `k_{OH} ${writeStored(rateOH, 'M^-1 s^-1')}` : '',
    time99 ? `99 % after ${{ '=': '', '<': 'less than ', '>': 'more than ' }[time99.kind]}${formatDuration(time99.value)}${typeof pH === 'number' ? ` at pH ${formatNumber(pH)}` : ''}` : '',
  ].filter(Boolean).join('; ')
}

/**
 * How fast the complex forms: the rate constant of the path with hydroxide, k_obs = k_w + k_OH·[OH⁻], and the time in which a label is bound.
 * @source É. Tóth, E. Brücher, I. Lázár, I. Tóth, Inorg. Chem. 33, 4070 (1994), from memory
 */
export const formation = defineRecord({
  kind: 'formation', version: 1, title: 'Formation', subject: 'complex',
  purpose: 'How fast the ligand takes its metal up: the rate constant with hydroxide, or the time to 99 % at a pH and an excess of ligand.',
  fields: [
    { type: 'quantity', key: 'rateOH', label: 'k_{OH}', required: false, group: 'Value', dimension: 'rateSecondOrder', stored: 'M^-1 s^-1', units: ['M^-1 s^-1'], min: 0, isAbove: true, max: 1e12, bounds: ['=', '<', '>'] },
    {
      type: 'quantity', key: 'time99', label: 'Time to 99 %', required: false, group: 'Value', dimension: 'time', stored: 's', units: ['min', 's', 'h', 'd'], min: 0, isAbove: true, max: 1e8, bounds: ['=', '<', '>'],
      help: 'Not reached in the time watched: "more than".',
    },
  ],
  conditions: [
    { ...pHField, required: false }, temperatureField, ionicStrengthField(false), { ...mediumField, required: false },
    { type: 'number', key: 'excess', label: 'Ligand per metal', required: false, group: 'Conditions', dimension: null, stored: '', units: [''], min: 1, max: 1e6 },
    { type: 'number', key: 'metal_mM', label: 'Metal', required: false, group: 'Conditions', dimension: 'concentration', stored: 'mM', units: ['mM', 'µM', 'M'], min: 0, isAbove: true, max: 1000 },
    { type: 'text', key: 'method', label: 'Method', required: false, group: 'Conditions', most: 200 }, noteField,
  ],
  check,
  emits,
  summarise,
  describe: conditions => [
    typeof conditions.pH === 'number' ? `pH ${formatNumber(conditions.pH)}` : '', describeMedium(conditions) || (typeof conditions.temperature_K === 'number' ? formatCelsius(conditions.temperature_K, 0) : ''),
    typeof conditions.excess === 'number' ? `${formatNumber(conditions.excess)} ligand per metal` : '',
  ].filter(Boolean).join(', '),
})
