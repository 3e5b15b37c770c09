import { blocks } from '../tabular/problem'
import type { SeriesTube, UploadProblem } from '../types'

/** Tubes that a relaxivity needs at least, and concentrations that must differ. */
export const MIN_TUBES = 3

/** What keeps a set of tubes from giving a slope. */
export function tubeSetProblems(all: readonly SeriesTube[]): UploadProblem[] {
  const tubes = all.filter(tube => tube.role !== 'reference')
  const accepted = `at least ${MIN_TUBES} tubes with different concentrations, a blank among them if there is one`
  if (tubes.length < MIN_TUBES) {
    const count = tubes.length === 1 ? 'only one tube' : `only ${tubes.length} tubes`
    return [blocks('tooFewTubes', `The series has ${count}: a line needs ${MIN_TUBES}.`, accepted)]
  }
  const distinct = new Set(tubes.map(tube => tube.conc_mM)).size
  if (distinct === 1) return [blocks('equalConcentrations', `All ${tubes.length} tubes have the same concentration, ${tubes[0]?.conc_mM} mM: they give no slope.`, accepted)]
  const unlikely = tubes.filter(tube => tube.conc_mM > 500)
  return unlikely.map(tube => ({ ...blocks('highConcentration', `Tube ${tube.label} has ${tube.conc_mM} mM.`, 'another unit for the concentration, if it was taken wrongly', { field: `tubes.${tube.tubeNo}.conc_mM` }), severity: 'asks' as const }))
}
