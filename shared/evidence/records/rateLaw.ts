import { formatNumber } from '../../format'
import { RATE_TERMS, SATURATION_CONSTANTS, SUM_CONSTANTS, type SaturationConstant, type SumConstant } from '../../science/kinetics/rateTerms'
import type { Dimension } from '../../science/units'
import type { EvidenceDraft } from '../types'
import { describeMedium, draftOf, ionicStrengthField, mediumField, noteField, temperatureField, writeStored } from './common'
import { defineRecord, type NumberField, type QuantityField, type RecordProblem } from './define'
import type { RecordEntry } from './entry'
import { choiceIn, conditionsOf, numberIn, quantityIn } from './values'

/** Unit of each sort of constant: dimension of the unit table, stored symbol, symbols offered. */
const UNITS_OF: Record<string, { dimension: Dimension | null, stored: string, units: readonly string[] }> = {
  's⁻¹': { dimension: 'rate', stored: 's^-1', units: ['s^-1', 'min^-1', 'h^-1', 'd^-1'] },
  'M⁻¹ s⁻¹': { dimension: 'rateSecondOrder', stored: 'M^-1 s^-1', units: ['M^-1 s^-1', 'mM^-1 s^-1'] },
  'M⁻² s⁻¹': { dimension: 'rateThirdOrder', stored: 'M^-2 s^-1', units: ['M^-2 s^-1'] },
  'M⁻¹': { dimension: null, stored: 'M^-1', units: ['M^-1'] },
}
const LARGEST = 1e12

const SATURATION_NAMES = Object.keys(SATURATION_CONSTANTS) as SaturationConstant[]
const SATURATION_ONLY = SATURATION_NAMES.filter((name): name is Exclude<SaturationConstant, 'k0_per_s'> => name !== 'k0_per_s')
const SATURATION_WORDS = { k1_per_s: 'rate of the protonated complex', kProton_per_M: 'protonation constant of the complex', k3_per_s: 'rate of the binuclear complex', kMetal_per_M: 'binding of the competing metal' } as const

/** `k1` and `k(Zn)` with the part after the k lowered. */
const lowered = (label: string): string => label.replace(/^([kK])\(?(\w+)\)?$/, '$1_{$2}')

function constant(key: string, label: string, unit: string, form: 'sum' | 'saturation' | 'both'): QuantityField {
  return {
    type: 'quantity', key, label, required: false, group: 'Constants', ...UNITS_OF[unit]!, min: 0, max: LARGEST, isAbove: true, bounds: form === 'saturation' ? ['='] : ['=', '<', '>'],
    ...(form === 'both' ? {} : { onlyWhen: { key: 'form', isOneOf: [form] } }),
  }
}

const sumFields = SUM_CONSTANTS.map(name => constant(name, `${lowered(RATE_TERMS[name].label)}, ${RATE_TERMS[name].words}`, RATE_TERMS[name].unit, name === 'k0_per_s' ? 'both' : 'sum'))
const saturationFields = SATURATION_ONLY.map(name => constant(name, `${lowered(SATURATION_CONSTANTS[name].label)}, ${SATURATION_WORDS[name]}`, SATURATION_CONSTANTS[name].unit, 'saturation'))

/** Correlation between two constants of one fit, as the source prints it. */
const correlationField: NumberField = {
  type: 'number', key: 'correlation_k0_k1', label: 'Correlation of k_0 and k_1', help: 'Where the source gives it; otherwise taken as none.', required: false, group: 'Constants', dimension: null, stored: '', units: [''], min: -1, max: 1,
  onlyWhen: { key: 'form', isOneOf: ['sum'] },
}
const pHEnd = (key: string, label: string): NumberField => ({
  type: 'number', key, label, help: 'pH 1 is 0.1 M acid, pH 0 is 1 M.', required: true, group: 'Conditions', dimension: null, stored: '', units: [''], min: -1, max: 14,
})

function check(entry: RecordEntry): RecordProblem[] {
  const form = choiceIn(entry, 'form')
  const given = [...SUM_CONSTANTS, ...SATURATION_ONLY].filter(name => entry[name] !== undefined)
  if (given.length === 0) return [{ field: 'k1_per_M_s', message: 'A rate law needs one constant at least.', accepted: 'one or more constants, exact or as a bound' }]
  if (form === 'saturation') {
    const lacks = (needed: string, has: string, words: string): RecordProblem[] => entry[has] !== undefined && entry[needed] === undefined
      ? [{ field: needed, message: `${words} must be given together.`, accepted: 'both of them, or neither' }]
      : []
    const problems = [
      ...lacks('kProton_per_M', 'k1_per_s', 'k1 and K(H)'), ...lacks('k1_per_s', 'kProton_per_M', 'k1 and K(H)'),
      ...lacks('kMetal_per_M', 'k3_per_s', 'k3 and K(M)'), ...lacks('k3_per_s', 'kMetal_per_M', 'k3 and K(M)'),
    ]
    if (entry.k3_per_s !== undefined && !choiceIn(entry, 'metalOfLaw')) problems.push({ field: 'metalOfLaw', message: 'k3 and K(M) belong to a metal.', accepted: 'zinc, copper or calcium' })
    if (entry.k0_per_s?.type === 'quantity' && entry.k0_per_s.kind !== '=') problems.push({ field: 'k0_per_s', message: 'The saturation form takes exact values only.', accepted: 'an exact value, or the sum form' })
    if (problems.length > 0) return problems
  }
  const [low, high] = [numberIn(rateLaw, entry, 'pHMin'), numberIn(rateLaw, entry, 'pHMax')]
  return low !== null && high !== null && low > high ? [{ field: 'pHMax', message: 'The highest pH measured is below the lowest.', accepted: 'the lowest first' }] : []
}

/** Constants of one record come from one fit: they name one group, with their correlation where it is known. */
function emits(entry: RecordEntry): EvidenceDraft[] {
  const conditions = conditionsOf(rateLaw, entry)
  const form = choiceIn(entry, 'form') ?? 'sum'
  const enthalpy = quantityIn(rateLaw, entry, 'activationEnthalpy')
  const correlation = numberIn(rateLaw, entry, 'correlation_k0_k1')
  const detail: EvidenceDraft['detail'] = {
    form, pHMin: numberIn(rateLaw, entry, 'pHMin'), pHMax: numberIn(rateLaw, entry, 'pHMax'), metal: choiceIn(entry, 'metalOfLaw'),
    enthalpy_kJ_per_mol: enthalpy?.value ?? null, enthalpy_se_kJ_per_mol: enthalpy?.se ?? null, correlation_k0_k1: correlation,
  }
  const names = [...SUM_CONSTANTS, ...SATURATION_ONLY] as (SumConstant | SaturationConstant)[]
  return names.flatMap((name) => {
    const stored = quantityIn(rateLaw, entry, name)
    return stored ? [draftOf({ quantity: name, stored, conditions, isPositive: true, detail })] : []
  })
}

function summarise(entry: RecordEntry): string {
  return [...SUM_CONSTANTS, ...SATURATION_ONLY].flatMap((name) => {
    const stored = quantityIn(rateLaw, entry, name)
    const field = rateLaw.fields.find(one => one.key === name)!
    return stored ? [`${field.label.split(',')[0]!} ${writeStored(stored, (field as QuantityField).stored)}`] : []
  }).join('; ')
}

export const rateLaw = defineRecord({
  kind: 'rateLaw', version: 1, title: 'Rate law of dissociation', subject: 'complex',
  purpose: 'How fast the complex lets go: the constants of its rate law, each exact or a bound.',
  fields: [
    {
      type: 'choice', key: 'form', label: 'Form', required: true, group: 'Form', preset: 'sum',
      options: [{ value: 'sum', label: 'k_0 + k_1[H] + k_2[H]² + k_{M}[M] + k_{MH}[M][H]' }, { value: 'saturation', label: '(k_0 + k_1K_{H}[H] + k_3K_{M}[M]) / (1 + K_{H}[H] + K_{M}[M])' }],
    },
    ...sumFields, ...saturationFields,
    {
      type: 'choice', key: 'metalOfLaw', label: 'Metal of k_3 and K_{M}', required: false, group: 'Constants', onlyWhen: { key: 'form', isOneOf: ['saturation'] },
      options: [{ value: 'Zn', label: 'zinc' }, { value: 'Cu', label: 'copper' }, { value: 'Ca', label: 'calcium' }],
    },
    correlationField,
    {
      type: 'quantity', key: 'activationEnthalpy', label: 'Activation enthalpy', help: 'Without it the constants are not moved to another temperature.', required: false, group: 'Constants',
      dimension: 'energy', stored: 'kJ/mol', units: ['kJ/mol', 'J/mol', 'kcal/mol'], min: -200, max: 300, bounds: ['='],
    },
  ],
  conditions: [temperatureField, pHEnd('pHMin', 'Lowest pH measured'), pHEnd('pHMax', 'Highest pH measured'), ionicStrengthField(false), mediumField, noteField],
  check,
  emits,
  summarise,
  describe: conditions => [
    describeMedium(conditions),
    typeof conditions.pHMin === 'number' && typeof conditions.pHMax === 'number' ? `pH ${formatNumber(conditions.pHMin)} to ${formatNumber(conditions.pHMax)}` : '',
  ].filter(Boolean).join(', '),
})
