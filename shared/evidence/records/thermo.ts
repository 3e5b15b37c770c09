import { LANTHANIDES, METALS } from '../../schemas/metal'
import type { EvidenceDraft } from '../types'
import { describeMedium, draftOf, ionicStrengthField, mediumField, noteField, temperatureField, writeStored } from './common'
import { conditionalAtBloodPH, type EquilibriumInput } from './conditionalValues'
import { defineRecord, type NumberField, type QuantityField, type RecordContext, type RecordField, type RecordProblem } from './define'
import type { RecordEntry } from './entry'
import { complexLists, complexProtonationIn, hydroxidesIn, listProblems, metalLists, protonationIn, protonationLists } from './thermoLists'
import { choiceIn, conditionsOf, numberIn, quantityIn } from './values'

/** Competing metals whose constant with the same ligand a record can carry; the plasma model uses the first four. */
export const COMPETING_METALS = ['Ca', 'Mg', 'Zn', 'Cu', 'Fe', 'Mn'] as const
const METAL_WORDS = { Ca: 'calcium', Mg: 'magnesium', Zn: 'zinc', Cu: 'copper', Fe: 'iron(III)', Mn: 'manganese(II)' } as const
/** Small ligands that compete for the metal of the agent. */
export const COMPETING_LIGANDS = { Citrate: 'citrate', Carbonate: 'carbonate', HydrogenPhosphate: 'hydrogen phosphate' } as const
const COMPETING_LIGAND_KEYS = Object.keys(COMPETING_LIGANDS) as (keyof typeof COMPETING_LIGANDS)[]

const logConstant = (key: string, label: string, required: boolean, group: string): QuantityField =>
  ({ type: 'quantity', key, label, required, group, dimension: null, stored: '', units: [''], min: -2, max: 40, bounds: ['=', '<', '>'] })

const METHODS = [
  ['potentiometry', 'potentiometric titration'], ['competition', 'competition with another ligand or metal'], ['spectrophotometry', 'spectrophotometric titration'],
  ['relaxometry', 'relaxometric titration'], ['calorimetry', 'calorimetry'], ['compiled', 'critically compiled'], ['practice', 'common practice, no source'], ['other', 'another, named in the note'],
] as const
const PH_SCALES = [['concentration', 'minus log of the hydrogen ion concentration'], ['activity', 'electrode reading, activity buffers'], ['notStated', 'not stated']] as const

/** A figure of common practice has no conditions of its own: asking for them would invent them. */
const statedOnly = <F extends RecordField>(field: F): F => ({ ...field, unless: { key: 'method', isOneOf: ['practice'] } })
const pKwField: NumberField = { type: 'number', key: 'pKw', label: 'pK_w of the medium', help: 'Only for constants written with hydroxide.', required: false, group: 'Metal', dimension: null, stored: '', units: [''], min: 11, max: 16 }

const pKwIn = (entry: RecordEntry): number | null => numberIn(thermo, entry, 'pKw')
const logKIn = (entry: RecordEntry): number => quantityIn(thermo, entry, 'logK')!.value

function check(entry: RecordEntry, { metal }: RecordContext): RecordProblem[] {
  const lanthanide = choiceIn(entry, 'otherLanthanide')
  if (lanthanide === metal) return [{ field: 'otherLanthanide', message: `${metal} is the metal of the agent itself.`, accepted: 'another lanthanide' }]
  if (lanthanide && !entry.logKLn) return [{ field: 'logKLn', message: `The constant with ${lanthanide} is missing.`, accepted: 'log K, or no other lanthanide' }]
  return listProblems(entry, logKIn(entry), pKwIn(entry))
}

function inputOf(entry: RecordEntry, context: RecordContext): EquilibriumInput {
  const pKw = pKwIn(entry)
  return {
    logK: quantityIn(thermo, entry, 'logK')!, own: protonationIn(entry), complexProtonation: complexProtonationIn(entry, logKIn(entry)),
    complexHydroxide: hydroxidesIn(entry, 'complexHydroxide', pKw), metalHydroxide: hydroxidesIn(entry, 'metalHydroxide', pKw), registered: context.ligandProtonation, conditions: conditionsOf(thermo, entry),
  }
}

function emits(entry: RecordEntry, context: RecordContext): EvidenceDraft[] {
  const { metal } = context
  const conditions = { ...conditionsOf(thermo, entry), metal }
  const input = inputOf(entry, context)
  const enthalpy = quantityIn(thermo, entry, 'enthalpy')
  const detail: EvidenceDraft['detail'] = {
    metal, protonation: (input.own ?? context.ligandProtonation?.steps ?? []).map(step => step.value), complexProtonation: [...input.complexProtonation], complexHydroxide: [...input.complexHydroxide],
    metalHydroxide: [...input.metalHydroxide], enthalpy_kJ_per_mol: enthalpy?.value ?? null, enthalpy_se_kJ_per_mol: enthalpy?.se ?? null,
  }
  const drafts = [draftOf({ quantity: 'logK', stored: input.logK, conditions, detail })]
  for (const [key, competitor] of competitorsIn(entry)) drafts.push(draftOf({ quantity: key, stored: quantityIn(thermo, entry, key)!, conditions: { ...conditions, metal: competitor }, detail: { metal: competitor } }))
  for (const ligand of COMPETING_LIGAND_KEYS) {
    const stored = quantityIn(thermo, entry, `logKWith${ligand}`)
    if (stored) drafts.push(draftOf({ quantity: `logKWith${ligand}`, stored, conditions, detail: { metal, ligand: COMPETING_LIGANDS[ligand] } }))
  }
  return [...drafts, ...conditionalAtBloodPH(input, metal)]
}

/** Field of each competing metal that is given, with the metal. */
function competitorsIn(entry: RecordEntry): [string, string][] {
  const lanthanide = choiceIn(entry, 'otherLanthanide')
  const all: [string, string][] = [...COMPETING_METALS.map((metal): [string, string] => [`logK${metal}`, metal]), ...(lanthanide ? [['logKLn', lanthanide] as [string, string]] : [])]
  return all.filter(([key]) => entry[key] !== undefined)
}

/** Version 2: forms of every list, hydroxides, enthalpy, more competitors, and figures of common practice. What version 1 kept still means the same. */
export const thermo = defineRecord({
  kind: 'thermo', version: 2, title: 'Stability constants', subject: 'complex',
  purpose: 'How strongly the ligand holds its metal, with protonation constants and competitors.',
  fields: [
    { ...logConstant('logK', 'log K of the complex', true, 'Complex'), help: 'M + L = ML, concentration constant.' },
    {
      type: 'quantity', key: 'enthalpy', label: 'ΔH of M + L = ML', help: 'Without it log K is not moved to another temperature.', required: false, group: 'Complex', dimension: 'energy', stored: 'kJ/mol', units: ['kJ/mol', 'J/mol', 'kcal/mol'],
      min: -400, max: 400, bounds: ['='],
    },
    ...complexLists,
    ...protonationLists,
    ...metalLists, pKwField,
    ...COMPETING_METALS.map(metal => logConstant(`logK${metal}`, `log K with ${METAL_WORDS[metal]}`, false, 'Competing metals')),
    { type: 'choice', key: 'otherLanthanide', label: 'Another lanthanide', required: false, group: 'Competing metals', options: METALS.map(value => ({ value, label: LANTHANIDES[value].name })) },
    { ...logConstant('logKLn', 'log K with that lanthanide', false, 'Competing metals'), onlyWhen: { key: 'otherLanthanide', isOneOf: METALS } },
    ...COMPETING_LIGAND_KEYS.map(ligand => logConstant(`logKWith${ligand}`, `log K of the metal with ${COMPETING_LIGANDS[ligand]}`, false, 'Competing ligands')),
  ],
  conditions: [
    {
      type: 'choice', key: 'method', label: 'Method', required: true, group: 'Conditions', options: METHODS.map(([value, label]) => ({ value, label })),
      help: 'A figure of common practice has no conditions: it is marked so wherever it stands beside another.',
    },
    statedOnly(temperatureField), statedOnly(ionicStrengthField(true)), statedOnly(mediumField),
    statedOnly({ type: 'choice', key: 'pHScale', label: 'pH scale', required: true, group: 'Conditions', options: PH_SCALES.map(([value, label]) => ({ value, label })) }),
    noteField,
  ],
  check,
  emits,
  summarise: (entry, { metal }) => `log K(${metal}L) ${writeStored(quantityIn(thermo, entry, 'logK')!)}`,
  describe: conditions => [describeMedium(conditions), typeof conditions.method === 'string' ? METHODS.find(([value]) => value === conditions.method)?.[1] ?? conditions.method : ''].filter(Boolean).join(', '),
})
