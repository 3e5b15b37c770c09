import type { Electrode } from '../../science/titration/electrode'
import type { TitrationCurve } from '../../science/titration/curves'
import { columnOf } from '../relaxation/noise'
import type { Conditions, SeriesTube } from '../types'

/** One reading with what stood in the vessel before any base. null = nothing says it. */
export interface TitrationRow {
  readonly index: number
  readonly added_mL: number
  readonly reading: number
  readonly vessel_mL: number | null
  readonly acid_mM: number | null
  readonly metal_mM: number
  readonly base_mM: number | null
}

/** A curve of the file. Strong acid alone calibrates; what holds ligand is refined. */
export interface CurvePlan {
  readonly tubeNo: number
  readonly label: string
  readonly role: 'calibration' | 'ligand' | 'complex'
  readonly readings: 'pH' | 'mV'
  /** Each row is a flask of its own. */
  readonly isBatch: boolean
  readonly ligand_mM: number
  readonly rows: readonly TitrationRow[]
}

const numberOr = (value: unknown): number | null => (typeof value === 'number' ? value : null)

/** Reads a curve: from the table, else from the conditions of all curves. Amounts that differ from row to row make each row a flask of its own. */
export function planOf(tube: SeriesTube, conditions: Conditions): CurvePlan {
  const readings = tube.points.columns.includes('e_mV') ? 'mV' : 'pH'
  const column = (field: string) => columnOf(tube, field)
  const [volume, reading] = [column('volume_L'), column(readings === 'mV' ? 'e_mV' : 'pH')]
  const fields = ['vessel_L', 'acid_mM', 'metal_mM', 'base_mM'] as const
  const own = Object.fromEntries(fields.map(field => [field, column(field)]))
  const isBatch = fields.some(field => new Set((own[field] ?? []).filter(value => value !== null)).size > 1)
  // in a titration the first row that says an amount says it for all; a flask says its own
  const one = Object.fromEntries(fields.map(field => [field, own[field]?.find(value => value !== null) ?? null]))
  const at = (field: (typeof fields)[number], i: number): number | null => (isBatch ? own[field]?.[i] ?? null : one[field] ?? null) ?? (field === 'metal_mM' ? null : numberOr(conditions[field]))
  const rows = tube.points.rows.map((_, index): TitrationRow => {
    const vessel_L = at('vessel_L', index)
    return {
      index, added_mL: (volume?.[index] ?? NaN) * 1000, reading: reading?.[index] ?? NaN, vessel_mL: vessel_L === null ? null : vessel_L * 1000, acid_mM: at('acid_mM', index), metal_mM: at('metal_mM', index) ?? 0, base_mM: at('base_mM', index),
    }
  })
  const role = tube.conc_mM === 0 ? 'calibration' : rows.some(row => row.metal_mM > 0) ? 'complex' : 'ligand'
  return { tubeNo: tube.tubeNo, label: tube.label, role, readings, isBatch, ligand_mM: tube.conc_mM, rows }
}

/** How the titrant stands after calibration, and what the curves are weighed by. */
export interface Weighing {
  /** Titre found over titre stated; 1 where it is taken as stated. */
  readonly titre: number
  readonly carbonate_mM: number
  readonly ligandProtons: number
  readonly sdPH: number
  readonly sdE_mV: number
  readonly sdVolume_mL: number
  readonly refineAcid: boolean
}

/** Titrant in mol/L by component: strong base is H below zero, and its carbonate takes the place of two hydroxides. */
export function titrantOf(base_mM: number, { titre, carbonate_mM }: Pick<Weighing, 'titre' | 'carbonate_mM'>): Record<string, number> {
  const base_M = base_mM * titre / 1000
  const carbonate_M = carbonate_mM / 1000
  return { H: 2 * carbonate_M - base_M, ...(carbonate_M > 0 ? { CO3: carbonate_M } : {}) }
}

/** Acid, ligand and metal of a row before any base, mmol; protons of the ligand are counted with the acid. */
export function amountsOf(row: TitrationRow, ligand_mM: number, ligandProtons: number): Record<string, number> {
  const vessel_L = row.vessel_mL! / 1000
  return { H: (row.acid_mM! + ligandProtons * ligand_mM) * vessel_L, L: ligand_mM * vessel_L, ...(row.metal_mM > 0 ? { M: row.metal_mM * vessel_L } : {}) }
}

/** Why a row cannot be refined though nobody left it out; null where it can. */
export function unusable(row: TitrationRow, { carbonate_mM }: Weighing): string | null {
  return carbonate_mM > 0 && row.added_mL === 0 ? 'No base added yet, so none of its carbonate is there.' : null
}

/** The curve as the refinement reads it, of the rows given. */
export function curveOf(plan: CurvePlan, rows: readonly TitrationRow[], { electrode, ...weighing }: Weighing & { electrode: Electrode | null }): TitrationCurve {
  const base = { label: plan.label, readings: rows.map(row => row.reading), sigma_reading: plan.readings === 'mV' ? weighing.sdE_mV : weighing.sdPH, ...(plan.readings === 'mV' && electrode ? { electrode } : {}) }
  if (!plan.isBatch) {
    const first = rows[0]!
    return {
      ...base, kind: 'volumetric', vessel_mL: first.vessel_mL!, initial_mmol: amountsOf(first, plan.ligand_mM, weighing.ligandProtons), titrant_M: titrantOf(first.base_mM!, weighing),
      volumes_mL: rows.map(row => row.added_mL), sigma_mL: weighing.sdVolume_mL, refineAcid: weighing.refineAcid,
    }
  }
  return { ...base, kind: 'batch', totals_M: rows.map(row => totalsOf(plan, row, weighing)) }
}

/** Totals of a row after its base, mol/L. */
export function totalsOf({ ligand_mM }: CurvePlan, row: TitrationRow, weighing: Pick<Weighing, 'titre' | 'carbonate_mM' | 'ligandProtons'>): Record<string, number> {
  const start = amountsOf(row, ligand_mM, weighing.ligandProtons)
  // a flask may hold its acid as a balance, without any base measured in
  const titrant = row.added_mL > 0 ? titrantOf(row.base_mM!, weighing) : {}
  const names = [...new Set([...Object.keys(start), ...Object.keys(titrant)])]
  return Object.fromEntries(names.map(name => [name, ((start[name] ?? 0) + (titrant[name] ?? 0) * row.added_mL) / (row.vessel_mL! + row.added_mL)]))
}
