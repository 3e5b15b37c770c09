import { formatCelsius, formatNumber } from '../../format'
import { stepwiseFromAcidConstants, stepwiseFromOverall } from '../../science/equilibria/protonation'
import type { EvidenceDraft } from '../types'
import { describeMedium, draftOf, ionicStrengthField, mediumField, noteField, temperatureField, writeStored } from './common'
import { conditionalAtBloodPH, type EquilibriumInput } from './conditionalValues'
import { defineRecord, type QuantityField, type RecordContext, type RecordProblem, type StepsField } from './define'
import type { RecordEntry } from './entry'
import { choiceIn, conditionsOf, quantityIn, stepsIn, type Step } from './values'

/** Competing metals whose constant with the same ligand the plasma model can use. */
export const COMPETING_METALS = ['Ca', 'Mg', 'Zn', 'Cu'] as const
const METAL_WORDS = { Ca: 'calcium', Mg: 'magnesium', Zn: 'zinc', Cu: 'copper' } as const

const logConstant = (key: string, label: string, required: boolean, group: string): QuantityField =>
  ({ type: 'quantity', key, label, required, group, dimension: null, stored: '', units: [''], min: -2, max: 40, bounds: ['=', '<', '>'] })
const steps = (key: string, label: string, help: string): StepsField => ({ type: 'steps', key, label, help, required: false, group: 'Protonation', most: 12, min: -2, max: 60 })

const FORMS = [
  { value: 'stepwise', label: 'stepwise log K, most basic first' }, { value: 'overall', label: 'overall log β, one proton first' }, { value: 'acid', label: 'pKa, most acidic first' },
] as const
const METHODS = [
  ['potentiometry', 'potentiometric titration'], ['competition', 'competition with another ligand or metal'], ['spectrophotometry', 'spectrophotometric titration'],
  ['relaxometry', 'relaxometric titration'], ['calorimetry', 'calorimetry'], ['compiled', 'critically compiled'], ['other', 'another, named in the note'],
] as const
const PH_SCALES = [['concentration', 'minus log of the hydrogen ion concentration'], ['activity', 'electrode reading, activity buffers'], ['notStated', 'not stated']] as const

/** Stepwise constants, most basic first, from whatever form the source states. Errors go with the constants as they stand only in the stepwise and pKa forms. */
export function protonationIn(entry: RecordEntry): Step[] | null {
  const given = stepsIn(entry, 'protonation')
  if (!given) return null
  const form = choiceIn(entry, 'protonationForm') ?? 'stepwise'
  const values = given.map(step => step.value)
  if (form === 'acid') {
    const errors = given.map(step => step.se).reverse()
    return stepwiseFromAcidConstants(values).map((value, j) => ({ value, se: errors[j] ?? null }))
  }
  if (form === 'overall') return stepwiseFromOverall(values).map((value, j) => ({ value, se: j === 0 ? given[0]!.se : null }))
  return given
}

function check(entry: RecordEntry): RecordProblem[] {
  const stepwise = protonationIn(entry)
  if (!stepwise) return []
  const field = 'protonation'
  if (!choiceIn(entry, 'protonationForm')) return [{ field: 'protonationForm', message: 'Say in which form the protonation constants are given.', accepted: FORMS.map(form => form.label).join(', ') }]
  if (stepwise.some(({ value }) => value < -2 || value > 15)) return [{ field, message: 'Read in this form, a stepwise constant lies outside what a ligand can have.', accepted: 'stepwise constants between −2 and 15; look at the form chosen' }]
  const rises = stepwise.findIndex((step, j) => j > 0 && step.value > stepwise[j - 1]!.value + 0.6)
  return rises < 0 ? [] : [{ field, message: `Read in this form, constant ${rises + 1} is larger than the one before it.`, accepted: 'stepwise constants that fall from the most basic site on; look at the form chosen' }]
}

function inputOf(entry: RecordEntry, context: RecordContext): EquilibriumInput {
  return {
    logK: quantityIn(thermo, entry, 'logK')!, own: protonationIn(entry), complexProtonation: (stepsIn(entry, 'complexProtonation') ?? []).map(step => step.value),
    registered: context.ligandProtonation, conditions: conditionsOf(thermo, entry),
  }
}

function emits(entry: RecordEntry, context: RecordContext): EvidenceDraft[] {
  const { metal } = context
  const conditions = { ...conditionsOf(thermo, entry), metal }
  const steps = protonationIn(entry) ?? context.ligandProtonation?.steps ?? []
  const drafts = [draftOf({ quantity: 'logK', stored: quantityIn(thermo, entry, 'logK')!, conditions, detail: { metal, protonation: steps.map(step => step.value) } })]
  for (const competitor of COMPETING_METALS) {
    const stored = quantityIn(thermo, entry, `logK${competitor}`)
    if (stored) drafts.push(draftOf({ quantity: `logK${competitor}`, stored, conditions: { ...conditions, metal: competitor }, detail: { metal: competitor } }))
  }
  return [...drafts, ...conditionalAtBloodPH(inputOf(entry, context), metal)]
}

export const thermo = defineRecord({
  kind: 'thermo', version: 1, title: 'Stability constants', subject: 'complex',
  purpose: 'How strongly the ligand holds its metal, with protonation constants and competing metals.',
  fields: [
    { ...logConstant('logK', 'log K of the complex', true, 'Complex'), help: 'M + L = ML, concentration constant.' },
    { ...steps('complexProtonation', 'Protonation of the complex, log K', 'ML + H = MLH, then MLH + H; leave empty where none was found.'), group: 'Complex', most: 3, max: 12 },
    steps('protonation', 'Protonation constants of the ligand', 'Left empty, those registered with the ligand are used, and a difference of medium is flagged.'),
    { type: 'choice', key: 'protonationForm', label: 'Form of the protonation constants', required: false, group: 'Protonation', options: FORMS },
    ...COMPETING_METALS.map(metal => logConstant(`logK${metal}`, `log K with ${METAL_WORDS[metal]}`, false, 'Competing metals')),
  ],
  conditions: [
    temperatureField, ionicStrengthField(true), mediumField,
    { type: 'choice', key: 'method', label: 'Method', required: true, group: 'Conditions', options: METHODS.map(([value, label]) => ({ value, label })) },
    { type: 'choice', key: 'pHScale', label: 'pH scale', required: true, group: 'Conditions', options: PH_SCALES.map(([value, label]) => ({ value, label })) },
    noteField,
  ],
  check,
  emits,
  summarise: (entry, { metal }) => `log K(${metal}L) ${writeStored(quantityIn(thermo, entry, 'logK')!)}`,
  describe: conditions => describeMedium(conditions) + (typeof conditions.method === 'string' ? `, ${METHODS.find(([value]) => value === conditions.method)?.[1] ?? conditions.method}` : ''),
})

/** "25 °C, 0.1 M" of the protonation constants registered with a ligand. */
export const protonationWords = (one: { temperature_K: number, ionicStrength_M: number, medium: string }): string => `${formatCelsius(one.temperature_K, 0)}, ${formatNumber(one.ionicStrength_M)} M ${one.medium}`
