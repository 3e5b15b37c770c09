import type { ColumnSpec } from '../types'

/** Columns that name a tube and what is in it. */
export const TUBE_COLUMNS: readonly ColumnSpec[] = [
  {
    stem: 'tube', field: 'tube', label: 'Tube', dimension: 'text', role: 'tube', required: false, help: 'Name or number of the tube',
    synonyms: ['tube', 'vial', 'sample', 'tube name', 'tube no', 'tube number', 'tube id', 'sample name', 'sample id', 'label', 'name', 'position', 'well', 'region', 'roi', 'phantom', 'sphere', 'bottle', 'compartment', 'cuvette', 'no', 'nr', '#', 'id'],
  },
  {
    stem: 'agent', field: 'agent', label: 'Agent', dimension: 'text', role: 'agent', required: false, help: 'Code of the agent as registered; empty for a blank',
    synonyms: ['agent', 'complex', 'compound', 'contrast agent', 'substance', 'agent code', 'complex code', 'code'],
  },
  { stem: 'batch', field: 'batch', label: 'Batch', dimension: 'text', role: 'batch', required: false, help: 'Lot of the agent', synonyms: ['batch', 'lot', 'batch no', 'lot no', 'batch number', 'lot number'] },
  {
    stem: 'conc', field: 'conc_mM', label: 'Concentration', dimension: 'concentration', role: 'conc', required: false, min: 0, help: 'Of metal in the tube; 0 for a blank',
    synonyms: ['conc', 'concentration', 'c', 'gd', '[gd]', 'gd conc', 'gd concentration', 'c gd', 'conc gd', 'metal', '[m]', 'metal concentration', 'c metal', 'molarity'],
  },
  {
    stem: 'concSe', field: 'concSe_mM', label: 'Concentration, own error', dimension: 'concentration', role: 'concError', required: false, min: 0, follows: 'conc',
    help: 'Standard error of this tube alone (pipetting), without the error of the stock',
    synonyms: ['conc error', 'conc se', 'conc sd', 'concentration error', 'concentration se', 'concentration sd', 'c error', 'c se', 'c sd', 'conc uncertainty', 'concentration uncertainty', 'se conc', 'sd conc', 'se c', 'sd c', 'conc ±'],
  },
]
