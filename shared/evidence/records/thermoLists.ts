import { reconcileForms } from '../../science/equilibria/checkConstants'
import { overallFromStepwise, stepwiseFromAcidConstants, stepwiseFromOverall } from '../../science/equilibria/protonation'
import type { ChoiceField, RecordProblem, StepsField } from './define'
import type { RecordEntry } from './entry'
import { choiceIn, stepsIn, type Step } from './values'

/** Lists of constants of a stability record: each with the form it is printed in, turned into one form and never mixed. */

const PROTONATION_FORMS = [
  { value: 'stepwise', label: 'stepwise log K, most basic first' }, { value: 'overall', label: 'overall log β, one proton first' }, { value: 'acid', label: 'pKa, most acidic first' },
] as const
const COMPLEX_FORMS = [
  { value: 'stepwise', label: 'log K of ML + H = MLH, then MLH + H' }, { value: 'overall', label: 'log β of ML + j H' }, { value: 'fromParts', label: 'log β of M + L + j H' },
] as const
/** `parent`: the complex ML or the bare metal M. */
const hydroxideForms = (parent: string) => [
  { value: 'hydrolysis', label: `log *β of ${parent} + j H_2O = ${parent}(OH)_{j} + j H, negative` }, { value: 'acid', label: `pKa of the water bound to ${parent}, first proton first` },
  { value: 'hydroxide', label: `stepwise log K of ${parent} + OH` }, { value: 'hydroxideOverall', label: `overall log β of ${parent} + j OH` },
]

const list = (key: string, label: string, help: string, group: string, most: number): StepsField => ({ type: 'steps', key, label, help, required: false, group, most, min: -60, max: 80 })
const formOf = (key: string, label: string, group: string, options: ChoiceField['options']): ChoiceField => ({ type: 'choice', key, label, required: false, group, options })

export const complexLists = [
  list('complexProtonation', 'Protonation of the complex', 'Leave empty where none was found.', 'Complex', 3),
  formOf('complexProtonationForm', 'Form of the constants of the protonated complex', 'Complex', COMPLEX_FORMS),
  list('complexHydroxide', 'Hydroxo complexes of ML', 'One hydroxide first.', 'Complex', 2),
  formOf('complexHydroxideForm', 'Form of the constants of the hydroxo complexes', 'Complex', hydroxideForms('ML')),
]
export const protonationLists = [
  list('protonation', 'Protonation constants of the ligand', 'Left empty, those registered with the ligand are used, and a difference of medium is flagged.', 'Protonation', 12),
  formOf('protonationForm', 'Form of the protonation constants', 'Protonation', PROTONATION_FORMS),
  list('protonationOverall', 'Overall log β of the same', 'Only where the source prints both: the two lists must agree.', 'Protonation', 12),
]
export const metalLists = [
  list('metalHydroxide', 'Hydroxides of the metal', 'Those with one metal ion, one hydroxide first.', 'Metal', 4),
  formOf('metalHydroxideForm', 'Form of the constants of the hydroxides', 'Metal', hydroxideForms('M')),
]

/** Stepwise constants of the ligand, most basic first, from whatever form the source states. Errors stay with constants that are printed as such. */
export function protonationIn(entry: RecordEntry): Step[] | null {
  const given = stepsIn(entry, 'protonation')
  if (!given) {
    const overall = stepsIn(entry, 'protonationOverall')
    return overall && fromOverall(overall)
  }
  const form = choiceIn(entry, 'protonationForm') ?? 'stepwise'
  if (form === 'overall') return fromOverall(given)
  if (form !== 'acid') return given
  const errors = given.map(step => step.se).reverse()
  return stepwiseFromAcidConstants(given.map(step => step.value)).map((value, j) => ({ value, se: errors[j] ?? null }))
}

const fromOverall = (given: readonly Step[]): Step[] => stepwiseFromOverall(given.map(step => step.value)).map((value, j) => ({ value, se: j === 0 ? given[0]!.se : null }))

/** Stepwise log K of ML + H, MLH + H …; those of M + L + j H lose the log K of the complex first. */
export function complexProtonationIn(entry: RecordEntry, logK: number): number[] {
  const values = (stepsIn(entry, 'complexProtonation') ?? []).map(step => step.value)
  const form = choiceIn(entry, 'complexProtonationForm') ?? 'stepwise'
  if (form === 'stepwise') return values
  return stepwiseFromOverall(form === 'fromParts' ? values.map(value => value - logK) : values)
}

/** log *β of parent + j H₂O = parent(OH)_j + j H⁺; `pKw` serves the forms that are written with hydroxide. */
export function hydroxidesIn(entry: RecordEntry, key: 'complexHydroxide' | 'metalHydroxide', pKw: number | null): number[] {
  const values = (stepsIn(entry, key) ?? []).map(step => step.value)
  const form = choiceIn(entry, `${key}Form`) ?? 'hydrolysis'
  if (form === 'hydrolysis') return values
  if (form === 'acid') return overallFromStepwise(values.map(value => -value))
  return (form === 'hydroxide' ? overallFromStepwise(values) : values).map((value, j) => value - (j + 1) * (pKw ?? NaN))
}

const isWithHydroxide = (entry: RecordEntry): boolean => ['complexHydroxideForm', 'metalHydroxideForm'].some(key => ['hydroxide', 'hydroxideOverall'].includes(choiceIn(entry, key) ?? ''))

/** What is wrong with the lists: a form not stated, constants that cannot be of that form, two lists that contradict each other. */
export function listProblems(entry: RecordEntry, logK: number, pKw: number | null): RecordProblem[] {
  const unstated = ['protonation', 'complexProtonation', 'complexHydroxide', 'metalHydroxide'].filter(key => stepsIn(entry, key) && !choiceIn(entry, `${key}Form`))
    .map(key => ({ field: `${key}Form`, message: 'Say in which form these constants are given.', accepted: acceptedForms(key) }))
  if (unstated.length > 0) return unstated
  if (isWithHydroxide(entry) && pKw === null) return [{ field: 'pKw', message: 'Constants written with hydroxide need the pK_w of the same medium.', accepted: '11 to 16, such as 13.78 at 25 °C and 0.1 M' }]
  return [...protonationProblems(entry), ...complexProblems(entry, logK), ...hydroxideProblems(entry, 'complexHydroxide', pKw), ...hydroxideProblems(entry, 'metalHydroxide', pKw)]
}

function acceptedForms(key: string): string {
  const field = [...complexLists, ...protonationLists, ...metalLists].find(one => one.key === `${key}Form`)
  return field?.type === 'choice' ? field.options.map(option => option.label).join('; ') : ''
}

function protonationProblems(entry: RecordEntry): RecordProblem[] {
  const stepwise = protonationIn(entry)
  if (!stepwise) return []
  const both = stepsIn(entry, 'protonation') ? stepsIn(entry, 'protonationOverall') : null
  const agreed = both ? reconcileForms({ stepwise: stepwise.map(step => step.value), overall: both.map(step => step.value) }) : null
  if (agreed && !agreed.ok) return [{ field: 'protonationOverall', message: agreed.message, accepted: agreed.accepted }]
  if (stepwise.some(({ value }) => value < -2 || value > 15)) return [{ field: 'protonation', message: 'Read in this form, a stepwise constant lies outside what a ligand can have.', accepted: 'stepwise constants between −2 and 15; look at the form chosen' }]
  const rises = stepwise.findIndex((step, j) => j > 0 && step.value > stepwise[j - 1]!.value + 0.6)
  return rises < 0 ? [] : [{ field: 'protonation', message: `Read in this form, constant ${rises + 1} is larger than the one before it.`, accepted: 'stepwise constants that fall from the most basic site on; look at the form chosen' }]
}

function complexProblems(entry: RecordEntry, logK: number): RecordProblem[] {
  const odd = complexProtonationIn(entry, logK).findIndex(value => value < -2 || value > 12)
  return odd < 0 ? [] : [{ field: 'complexProtonation', message: `Read in this form, step ${odd + 1} of the complex would have log K ${complexProtonationIn(entry, logK)[odd]!.toFixed(2)}.`, accepted: 'stepwise constants between −2 and 12; look at the form chosen' }]
}

/** Each hydroxide gives up a proton of water, so log *β is negative and falls. */
function hydroxideProblems(entry: RecordEntry, key: 'complexHydroxide' | 'metalHydroxide', pKw: number | null): RecordProblem[] {
  const steps = stepwiseFromOverall(hydroxidesIn(entry, key, pKw))
  const odd = steps.findIndex(value => !(value < 0 && value > -18))
  return odd < 0 ? [] : [{ field: key, message: `Read in this form, hydroxide ${odd + 1} would be given off with log K ${steps[odd]!.toFixed(2)}.`, accepted: 'steps between −18 and 0 once written as ML = ML(OH) + H; look at the form chosen' }]
}
