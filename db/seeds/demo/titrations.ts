import { openCurve, solveAt } from '../../../shared/science/titration/forward'
import { layOut, type TitrationCurve } from '../../../shared/science/titration/curves'
import { readingAt, type Electrode } from '../../../shared/science/titration/electrode'
import type { Species } from '../../../shared/science/equilibria/system'
import { createRandom, deriveSeed } from '../../../shared/science/random'
import { DEMO_SEED } from './forward'
import type { DemoUpload } from './series'

/** Curves of a titration file, amounts in mM before any base. */
interface DemoCurve { name: string, ligand_mM: number, metal_mM: number, acids_mM: readonly number[], added_mL: readonly number[] }

export interface DemoTitration extends DemoUpload {
  kind: 'thermo.titration'
  head: readonly string[]
  steps: readonly number[]
  logK: number
  vessel_mL: number
  base_mM: number
  curves: readonly DemoCurve[]
}

const ELECTRODE: Electrode = { e0_mV: 398.6, slope_mV: 58.94, junctionAcid_mV_per_M: 0, junctionBase_mV_per_M: 0, pKw: 13.78 }
const READING_SD_mV = 0.1
const BURETTE_SD_mL = 0.002
const along = (from: number, to: number, count: number): number[] => Array.from({ length: count }, (_, i) => Number((from + (to - from) * i / (count - 1)).toFixed(3)))

/** A tetraamide ring takes up its metal too slowly to be titrated: flasks of their own, read after a month. All values are invented. */
export const DEMO_TITRATIONS: readonly DemoTitration[] = [{
  fileName: 'SK-05_A1_titrations.csv', kind: 'thermo.titration', parts: [{ agent: 'SK-05', lot: 'A1' }], by: 'neve', day: '2026-10-08', fate: 'signed', steps: [9.6, 6], logK: 13.1, vessel_mL: 20, base_mM: 99.6,
  head: [
    'Metal: Gd', 'Temperature: 25.0 °C', 'Ionic strength: 0.1 M', 'Electrolyte: tetramethylammonium chloride', 'pKw: 13.78', 'pH scale: concentration', 'Ligand protons: 0', 'Protonation constants: 9.6; 6.0', 'Initial volume: 20 mL', 'Base: 99.6 mM',
    'Method note: flasks sealed under argon and read after 30 days at 25 °C', 'Date: 2026-10-08',
  ],
  curves: [
    { name: 'strong acid', ligand_mM: 0, metal_mM: 0, acids_mM: [5], added_mL: [...along(0.05, 0.9, 18), ...along(1.1, 2, 18)] },
    { name: 'ligand', ligand_mM: 2, metal_mM: 0, acids_mM: [6], added_mL: along(0.05, 1.5, 50) },
    { name: 'flasks', ligand_mM: 2, metal_mM: 2, acids_mM: along(2, 13, 23), added_mL: [0] },
  ],
}]

/** Text of a titration file: the balances with seeded noise on readings and burette. Same seed, same bytes. */
export function titrationText(file: DemoTitration): string {
  const random = createRandom(deriveSeed(DEMO_SEED, file.fileName))
  const rows = file.curves.flatMap(curve => curve.acids_mM.flatMap(acid_mM => curve.added_mL.map((added_mL) => {
    const true_mL = added_mL === 0 ? 0 : added_mL + BURETTE_SD_mL * random.normal()
    const { reading_mV } = readingAt(ELECTRODE, -pcHOf(file, { curve, acid_mM, added_mL: true_mL }) * Math.LN10)
    return [curve.name, curve.ligand_mM, curve.metal_mM, acid_mM, added_mL.toFixed(3), (reading_mV + READING_SD_mV * random.normal()).toFixed(2)].join(',')
  })))
  return [...file.head, '', 'curve,ligand (mM),metal (mM),acid (mM),base added (mL),E (mV)', ...rows].join('\n') + '\n'
}

function pcHOf({ steps, logK, vessel_mL, base_mM }: DemoTitration, { curve, acid_mM, added_mL }: { curve: DemoCurve, acid_mM: number, added_mL: number }): number {
  const total = (before_mM: number, titrant_mM = 0) => (before_mM * vessel_mL + titrant_mM * added_mL) / (vessel_mL + added_mL) / 1000
  const one: TitrationCurve = { kind: 'batch', label: curve.name, sigma_reading: 1, readings: [7], totals_M: [{ H: total(acid_mM, -base_mM), ...(curve.ligand_mM > 0 ? { L: total(curve.ligand_mM) } : {}), ...(curve.metal_mM > 0 ? { M: total(curve.metal_mM) } : {}) }] }
  const species: Species[] = [
    { name: 'OH', stoichiometry: { H: -1 }, logBeta: -ELECTRODE.pKw }, { name: 'ML', stoichiometry: { M: 1, L: 1 }, logBeta: logK },
    ...steps.map((_, j) => ({ name: `H${j + 1}L`, stoichiometry: { L: 1, H: j + 1 }, logBeta: steps.slice(0, j + 1).reduce((sum, step) => sum + step, 0) })),
  ]
  const points = layOut(one, ['M', 'L', 'H'])
  if ('ok' in points) throw new Error(points.message)
  const solver = openCurve(points, species, [])
  if ('ok' in solver) throw new Error(solver.message)
  const { pcH } = solveAt(solver, 0, 0)
  if (!Number.isFinite(pcH)) throw new Error(`${curve.name}: the balances of ${acid_mM} mM acid cannot be met.`)
  return pcH
}
