import { asks, blocks, quoted } from '../tabular/problem'
import type { Conditions, SeriesTube, UploadProblem } from '../types'
import { typedList } from './conditions'
import { planOf, totalsOf, type CurvePlan } from './curveOf'

/** How far the proton balance may be off before a curve is questioned: 0.15 in pH of what is free, and 0.1 mM. */
const FREE_FACTOR = 10 ** 0.15
const SLACK_M = 1e-4
/** Hydroxides that a metal can bind, and its complex; bound protons are as far below zero. Below this pH a lanthanide binds none worth counting (common practice, no source). */
const HYDROXIDES = 4
const HYDROXIDE_FROM_PH = 5

/** What is wrong with the curves of a series before anything is refined. */
export function checkTitration(tubes: readonly SeriesTube[], conditions: Conditions): UploadProblem[] {
  const plans = tubes.filter(tube => tube.points.rows.length > 0).map(tube => planOf(tube, conditions))
  const curves = plans.filter(plan => plan.role !== 'calibration')
  const electrode = plans.some(plan => plan.role === 'calibration' && plan.readings === 'mV') || (typeof conditions.e0_mV === 'number' && typeof conditions.slope_mV === 'number')
  return [...typedProblems(curves, conditions), ...plans.flatMap(plan => planProblems(plan, conditions, electrode))]
}

function typedProblems(curves: readonly CurvePlan[], conditions: Conditions): UploadProblem[] {
  const steps = typedList(conditions.protonation)
  const field = { field: 'conditions.protonation' }
  const how = 'stepwise log K, most basic first, with semicolons between, such as 9.5; 6.2; 2.7'
  const problems: UploadProblem[] = []
  if (steps === null) problems.push(blocks('unreadableList', `Protonation constants: ${quoted(String(conditions.protonation))} is no list of numbers.`, how, field))
  else if (steps.length === 0 && curves.length > 0) problems.push(blocks('noProtonation', 'Nothing says the protonation constants of the ligand.', `${how}; where a curve holds the ligand alone they are only the start of its refinement`, field))
  else if (steps.length > 12 || steps.some(value => value < -2 || value > 15)) problems.push(blocks('outOfDomain', 'A stepwise protonation constant lies outside −2 to 15.', how, field))
  else if (steps.some((value, j) => j > 0 && value > steps[j - 1]! + 0.6)) problems.push(blocks('protonationRises', 'The protonation constants rise: they seem to be pKa, or overall log β.', how, field))
  const hydroxides = typedList(conditions.metalHydroxide)
  if (hydroxides === null || hydroxides.length > 4 || hydroxides.some(value => value >= 0 || value < -60)) problems.push(blocks('unreadableList', 'Hydroxides of the metal: up to four numbers below 0 are read.', 'log *β of M + j H2O = M(OH)j + j H, such as −8.0; −16.4', { field: 'conditions.metalHydroxide' }))
  return problems
}

function planProblems(plan: CurvePlan, conditions: Conditions, electrode: boolean): UploadProblem[] {
  const at = { field: `tubes.${plan.tubeNo}` }
  const name = `Curve ${quoted(plan.label)}`
  const problems: UploadProblem[] = []
  const lacks = (id: string, what: string, accepted: string) => problems.push(blocks(id, `${name}: nothing says ${what}.`, accepted, at))
  if (plan.rows.some(row => row.vessel_mL === null)) lacks('noVessel', 'how much is in the vessel', 'a column of the volume in the vessel (mL), or one volume for all curves among the conditions')
  if (plan.rows.some(row => row.acid_mM === null)) lacks('noAcid', 'how much strong acid it holds', 'a column of strong acid (mM; 0 for none), or one concentration for all curves among the conditions')
  if (plan.rows.some(row => row.base_mM === null && row.added_mL > 0)) lacks('noTitrant', 'the concentration of the base', 'a column of the titrant (mM), or one concentration for all curves among the conditions')
  if (plan.readings === 'mV' && plan.role !== 'calibration' && !electrode) problems.push(blocks('noElectrode', `${name} is in mV, and nothing calibrates the electrode.`, 'a curve of strong acid with strong base in the same file (ligand 0), or E° and slope among the conditions', at))
  if (plan.role === 'calibration') problems.push(...calibrationProblems(plan, name))
  else problems.push(...curveProblems(plan, name))
  if (problems.every(one => one.severity !== 'blocks')) problems.push(...balanceProblems(plan, conditions, name))
  return problems
}

function calibrationProblems(plan: CurvePlan, name: string): UploadProblem[] {
  const at = { field: `tubes.${plan.tubeNo}` }
  if (plan.readings === 'pH') return [asks('calibratedTwice', `${name} holds no ligand and is in pH: it calibrates nothing.`, 'readings in mV, or the curve put aside', at)]
  if (plan.isBatch) return [blocks('amountsVary', `${name} holds no ligand, and its amounts differ from row to row.`, 'one vessel of strong acid, titrated with strong base', at)]
  if (plan.rows.some(row => row.metal_mM > 0)) return [blocks('metalWithoutLigand', `${name} holds metal and no ligand.`, 'strong acid alone for a calibration, or the concentration of the ligand', at)]
  if (plan.rows.length < 6) return [blocks('fewPoints', `${name} has ${plan.rows.length} points; a calibration needs 6.`, 'at least 6 points, or the curve put aside', at)]
  return falls(plan, name)
}

function curveProblems(plan: CurvePlan, name: string): UploadProblem[] {
  const at = { field: `tubes.${plan.tubeNo}` }
  if (plan.isBatch) {
    const half = plan.rows.some(row => row.metal_mM > 0) && plan.rows.some(row => row.metal_mM === 0)
    return half
      ? [blocks('metalInSome', `${name} holds metal in some rows and none in others.`, 'flasks with metal and flasks without under two names', at)]
      : [asks('batchPoints', `${name}: amounts differ from row to row, so each row is taken for a flask of its own.`, 'as it is for batch points, or one value in every row for a titration', at)]
  }
  return plan.rows.length < 5 ? [asks('fewPoints', `${name} has ${plan.rows.length} points.`, 'more points, or the curve put aside', at)] : falls(plan, name)
}

/** A volume that goes down is a slip, or another curve under the same name. */
function falls(plan: CurvePlan, name: string): UploadProblem[] {
  const row = plan.rows.findIndex((one, i) => i > 0 && !(one.added_mL > plan.rows[i - 1]!.added_mL))
  if (row < 0) return []
  const sentence = `${name}: base added goes from ${short(plan.rows[row - 1]!.added_mL)} to ${short(plan.rows[row]!.added_mL)} mL at point ${row + 1}.`
  return [blocks('volumesFall', sentence, 'volumes that rise; another name for another curve', { field: `tubes.${plan.tubeNo}` })]
}

const short = (value: number): string => String(Number(value.toPrecision(5)))

/**
 * Amounts that cannot give the pH read: what is free, h − Kw/h, is the total of acid less what is bound, and between none and all protons of the ligand are
 * bound, less the hydroxides of the metal. Told for the point that is farthest off.
 */
function balanceProblems(plan: CurvePlan, conditions: Conditions, name: string): UploadProblem[] {
  const most = typedList(conditions.protonation)?.length ?? 0
  if (plan.readings === 'mV' || plan.role === 'calibration' || most === 0 || typeof conditions.pKw !== 'number') return []
  const weighing = { titre: 1, carbonate_mM: typeof conditions.carbonate_mM === 'number' ? conditions.carbonate_mM : 0, ligandProtons: Number(conditions.ligandProtons ?? 0) }
  const off = plan.rows.map((row) => {
    const totals = totalsOf(plan, row, weighing)
    const [h, oh] = [10 ** -row.reading, 10 ** (row.reading - Number(conditions.pKw))]
    const carbonate = 2 * (totals.CO3 ?? 0)
    const [least, highest] = [totals.H! - most * totals.L! - carbonate, totals.H! + (row.reading > HYDROXIDE_FROM_PH ? HYDROXIDES * (totals.M ?? 0) : 0)]
    const over = h / FREE_FACTOR - oh * FREE_FACTOR - highest - SLACK_M
    const under = least - (h * FREE_FACTOR - oh / FREE_FACTOR) - SLACK_M
    return { row, by_M: Math.max(over, under), isOver: over > under }
  }).reduce((worst, one) => one.by_M > worst.by_M ? one : worst)
  if (!(off.by_M > 0)) return []
  return [asks('unbalanced', `${name}, point ${off.row.index + 1}: pH ${short(off.row.reading)} needs ${short(1000 * off.by_M)} mM ${off.isOver ? 'more' : 'less'} acid than the vessel can hold by its amounts.`,
    'acid, ligand protons, volume and titrant as they were, or as it is if the electrode reads far off', { field: `tubes.${plan.tubeNo}` })]
}
