import { formatCelsius, formatDuration, formatNumber } from '../../format'
import { draftOf, ionicStrengthField, noteField, temperatureField } from './common'
import { defineRecord, type RecordField } from './define'
import { conditionsOf, quantityIn } from './values'

const WORDS = { '=': '', '<': 'less than ', '>': 'more than ' } as const

/** "Strong acid" of common practice has neither concentration nor temperature: asking for them would invent them. */
const statedOnly = <F extends RecordField>(field: F): F => ({ ...field, unless: { key: 'acid', isOneOf: ['notStated'] } })

/** Comparable only with itself: the same acid at the same concentration and temperature. Version 2: an acid that is not stated. */
export const acidHalfLife = defineRecord({
  kind: 'acidHalfLife', version: 2, title: 'Half-life in acid', subject: 'complex',
  purpose: 'Time in which half of the complex lets go in a stated acid; comparable only under the same conditions.',
  fields: [
    {
      type: 'quantity', key: 'halfLife', label: 'Half-life', required: true, group: 'Value', dimension: 'time', stored: 's', units: ['h', 'min', 's', 'd'], min: 0, isAbove: true, max: 1e11, bounds: ['=', '<', '>'],
      help: 'Nothing seen in the time watched: "more than", with the shortest half-life the data allow.',
    },
  ],
  conditions: [
    { type: 'choice', key: 'acid', label: 'Acid', required: true, group: 'Conditions', options: [{ value: 'HCl', label: 'hydrochloric acid' }, { value: 'HClO4', label: 'perchloric acid' }, { value: 'HNO3', label: 'nitric acid' }, { value: 'other', label: 'another, named in the note' }, { value: 'notStated', label: 'strong acid, not stated which' }] },
    statedOnly({ type: 'number', key: 'acid_M', label: 'Acid concentration', required: true, group: 'Conditions', dimension: 'concentration', stored: 'M', units: ['M', 'mM'], min: 0.0001, max: 12 }),
    statedOnly(temperatureField), statedOnly(ionicStrengthField(false)),
    { type: 'text', key: 'method', label: 'Method', required: false, group: 'Conditions', most: 200 },
    noteField,
  ],
  check: () => [],
  emits: entry => [draftOf({ quantity: 'halfLifeAcid_s', stored: quantityIn(acidHalfLife, entry, 'halfLife')!, conditions: conditionsOf(acidHalfLife, entry), isPositive: true })],
  summarise(entry) {
    const { value, kind, se } = quantityIn(acidHalfLife, entry, 'halfLife')!
    return `t_{1/2} ${WORDS[kind]}${formatDuration(value)}${se === null ? '' : ` ± ${formatDuration(se, 2)}`}`
  },
  describe: ({ acid_M, acid, temperature_K }) => [
    acid === 'notStated' ? 'strong acid, not stated which' : '',
    typeof acid_M === 'number' ? `${formatNumber(acid_M)} M ${acid === 'other' || typeof acid !== 'string' ? 'acid' : acid.replace(/(\d)/, '_$1')}` : '',
    typeof temperature_K === 'number' ? formatCelsius(temperature_K, 0) : '',
  ].filter(Boolean).join(', '),
})
