import { TUBE_COLUMNS } from '../relaxation/columns'
import type { ColumnSpec } from '../types'

/** Columns that name a curve and the ligand in it. */
const CURVE_COLUMNS: readonly ColumnSpec[] = TUBE_COLUMNS.filter(spec => spec.role !== 'concError').map((spec) => {
  if (spec.stem === 'tube') return { ...spec, label: 'Curve', help: 'Name or number of the curve', synonyms: ['curve', 'titration', 'run', 'experiment', 'set', ...spec.synonyms] }
  if (spec.stem === 'conc') {
    return {
      ...spec, label: 'Ligand', help: 'In the vessel before any base; 0 for strong acid alone, which calibrates the electrode',
      synonyms: ['ligand', 'ligand concentration', 'concentration of ligand', 'concentration of the ligand', 'c ligand', 'c l', '[l]', 'total ligand', 'ligand total', 'conc', 'concentration'],
    }
  }
  return spec
})

/** What a curve holds: one value for the whole curve, or one per row where each row is a flask of its own. */
export const TITRATION_COLUMNS: readonly ColumnSpec[] = [
  ...CURVE_COLUMNS,
  { stem: 'volume', field: 'volume_L', label: 'Base added', dimension: 'volume', role: 'x', required: true, min: 0, max: 10, help: 'Volume of strong base added; 0 for a flask whose acid is already the balance', synonyms: ['volume', 'v', 'base added', 'titrant', 'titrant added', 'volume added', 'v base', 'added', 'volume of base', 'vol'] },
  { stem: 'ph', field: 'pH', label: 'pH', dimension: 'none', role: 'y', required: false, min: 0, max: 14, help: 'Minus log of the hydrogen ion concentration', synonyms: ['ph', 'ph value', 'measured ph', 'p[h]', 'pc h', 'pch', '-log[h]'] },
  { stem: 'e', field: 'e_mV', label: 'Reading of the electrode', dimension: 'potential', role: 'y', required: false, min: -2000, max: 2000, help: 'Of a glass electrode; a curve of strong acid alone calibrates it', synonyms: ['e', 'emf', 'potential', 'mv', 'reading', 'electrode', 'voltage', 'cell potential'] },
  { stem: 'vessel', field: 'vessel_L', label: 'In the vessel', dimension: 'volume', role: 'aux', required: false, above: 0, max: 10, help: 'Volume before any base', synonyms: ['vessel', 'initial volume', 'v0', 'start volume', 'volume in the vessel', 'vessel volume', 'flask volume'] },
  { stem: 'acid', field: 'acid_mM', label: 'Strong acid', dimension: 'concentration', role: 'aux', required: false, min: -20_000, max: 20_000, help: 'In the vessel before any base, without the protons of the ligand; negative for base put in', synonyms: ['acid', 'strong acid', 'acid concentration', 'c acid', 'hcl', 'hclo4', 'hno3', 'c h', '[h] total', 'total acid', 'acid total'] },
  { stem: 'metal', field: 'metal_mM', label: 'Metal', dimension: 'concentration', role: 'aux', required: false, min: 0, max: 20_000, parts: true, help: 'In the vessel before any base; 0 or empty for the ligand alone', synonyms: ['metal', 'metal concentration', 'c metal', 'c m', '[m]', 'total metal', 'metal total', 'gd', 'ln'] },
  { stem: 'base', field: 'base_mM', label: 'Titrant', dimension: 'concentration', role: 'aux', required: false, above: 0, max: 20_000, help: 'Strong base in the burette', synonyms: ['base', 'strong base', 'titrant concentration', 'c base', 'c titrant', 'koh', 'naoh', 'nme4oh', 'base concentration'] },
]
