import { formatCelsius, formatDuration, formatNumber } from '../../format'
import type { EvidenceDraft } from '../types'
import { draftOf, noteField, pHField, temperatureField, writeStored } from './common'
import { defineRecord, type RecordProblem } from './define'
import type { RecordEntry } from './entry'
import { choiceIn, conditionsOf, quantityIn } from './values'

const AGAINST = [
  ['serum', 'serum'], ['plasma', 'plasma'], ['wholeBlood', 'whole blood'], ['acid', 'acid'], ['ligand', 'a competing ligand'], ['metal', 'a competing metal'], ['protein', 'a binding protein'], ['other', 'another, named in the note'],
] as const
const WORDS = Object.fromEntries(AGAINST) as Readonly<Record<string, string>>

function check(entry: RecordEntry): RecordProblem[] {
  const problems: RecordProblem[] = []
  const intact = quantityIn(challenge, entry, 'intact')
  if (!intact && !entry.halfLife) problems.push({ field: 'intact', message: 'One of the two values is needed.', accepted: 'the share intact after a time, or the half-life, or both' })
  if (intact && !entry.after_s) problems.push({ field: 'after_s', message: 'A share means nothing without its time.', accepted: 'the time after which the share was measured' })
  if (['ligand', 'metal', 'protein'].includes(choiceIn(entry, 'against') ?? '') && !entry.competitor) problems.push({ field: 'competitor', message: 'Which competitor is not said.', accepted: 'its name, such as EDTA or zinc' })
  return problems
}

/** A share below or above the detection limit stays a bound. */
function emits(entry: RecordEntry): EvidenceDraft[] {
  const conditions = conditionsOf(challenge, entry)
  const [intact, halfLife] = [quantityIn(challenge, entry, 'intact'), quantityIn(challenge, entry, 'halfLife')]
  return [
    ...(intact ? [draftOf({ quantity: 'intactInChallenge_frac', stored: intact, conditions })] : []),
    ...(halfLife ? [draftOf({ quantity: 'halfLifeChallenge_s', stored: halfLife, conditions, isPositive: true })] : []),
  ]
}

function summarise(entry: RecordEntry): string {
  const [intact, halfLife] = [quantityIn(challenge, entry, 'intact'), quantityIn(challenge, entry, 'halfLife')]
  const percent = intact && { value: intact.value * 100, kind: intact.kind, se: intact.se === null ? null : intact.se * 100 }
  const { after_s } = conditionsOf(challenge, entry)
  return [
    percent ? `${writeStored(percent, '%')} intact${typeof after_s === 'number' ? ` after ${formatDuration(after_s)}` : ''}` : '',
    halfLife ? `t_{1/2} ${{ '=': '', '<': 'less than ', '>': 'more than ' }[halfLife.kind]}${formatDuration(halfLife.value)}` : '',
  ].filter(Boolean).join('; ')
}

/** How much of the complex outlasts serum, acid or a competitor; comparable only with the same challenge. */
export const challenge = defineRecord({
  kind: 'challenge', version: 1, title: 'Challenge', subject: 'complex',
  purpose: 'The share of the complex that is intact after a time in serum, acid or beside a competitor, or its half-life there; comparable only under the same conditions.',
  fields: [
    {
      type: 'quantity', key: 'intact', label: 'Share intact', required: false, group: 'Value', dimension: 'fraction', stored: '', units: ['%', ''], min: 0, max: 1, bounds: ['=', '<', '>'],
      help: 'Nothing of it left to see: "less than", with the detection limit. No loss seen: "more than".',
    },
    { type: 'quantity', key: 'halfLife', label: 'Half-life', required: false, group: 'Value', dimension: 'time', stored: 's', units: ['h', 'min', 'd', 's'], min: 0, isAbove: true, max: 1e11, bounds: ['=', '<', '>'] },
  ],
  conditions: [
    { type: 'choice', key: 'against', label: 'Challenged with', required: true, group: 'Conditions', options: AGAINST.map(([value, label]) => ({ value, label })) },
    { type: 'number', key: 'after_s', label: 'Measured after', required: false, group: 'Conditions', dimension: 'time', stored: 's', units: ['h', 'min', 'd', 's'], min: 0, isAbove: true, max: 1e9 },
    { type: 'text', key: 'competitor', label: 'Competitor', required: false, group: 'Conditions', most: 120, onlyWhen: { key: 'against', isOneOf: ['ligand', 'metal', 'protein'] } },
    { type: 'number', key: 'equivalents', label: 'Equivalents of it', help: 'Per complex', required: false, group: 'Conditions', dimension: null, stored: '', units: [''], min: 0, isAbove: true, max: 1e6, onlyWhen: { key: 'against', isOneOf: ['ligand', 'metal', 'protein'] } },
    { type: 'number', key: 'acid_M', label: 'Acid concentration', required: false, group: 'Conditions', dimension: 'concentration', stored: 'M', units: ['M', 'mM'], min: 0.0001, max: 12, onlyWhen: { key: 'against', isOneOf: ['acid'] } },
    { ...pHField, required: false }, temperatureField,
    { type: 'text', key: 'method', label: 'Method', required: false, group: 'Conditions', most: 200 }, noteField,
  ],
  check,
  emits,
  summarise,
  describe: ({ against, competitor, equivalents, acid_M, pH, temperature_K }) => [
    [typeof equivalents === 'number' ? `${formatNumber(equivalents)} equivalents of` : '', typeof acid_M === 'number' ? `${formatNumber(acid_M)} M` : '', typeof competitor === 'string' ? competitor : typeof against === 'string' ? WORDS[against] ?? '' : ''].filter(Boolean).join(' '),
    typeof pH === 'number' ? `pH ${formatNumber(pH)}` : '', typeof temperature_K === 'number' ? formatCelsius(temperature_K, 0) : '',
  ].filter(Boolean).join(', '),
})
