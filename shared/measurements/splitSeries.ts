import type { SeriesPart, UnderstoodTube } from './tabular/understood'

/**
 * Parts the tubes of a file into series, one per agent and batch. A blank or a reference tube that names no agent is shared: every series gets a copy of it; one
 * that names an agent and no batch goes to all batches of that agent; a reference tube goes to all. Tubes put aside belong to none, nor do those whose
 * concentration is still open. Tube numbers stay those of the file.
 */
export function splitSeries({ tubes }: { readonly tubes: readonly UnderstoodTube[] }): SeriesPart[] {
  const parts = new Map<string, SeriesPart>()
  for (const tube of tubes.filter(candidate => candidate.role === 'sample')) {
    const key = JSON.stringify([tube.agent, tube.batch])
    if (!parts.has(key)) parts.set(key, { complexCode: tube.agent, lot: tube.batch, tubes: [] })
  }
  for (const part of parts.values()) {
    part.tubes = tubes.filter(tube => belongs(tube, part)).flatMap(toSeriesTube)
  }
  return [...parts.values()]
}

function belongs(tube: UnderstoodTube, part: SeriesPart): boolean {
  if (tube.role === 'aside') return false
  if (tube.role === 'reference') return true
  if (tube.role === 'sample') return tube.agent === part.complexCode && tube.batch === part.lot
  if (tube.agent === null) return true
  return tube.agent === part.complexCode && (tube.batch === null || tube.batch === part.lot)
}

function toSeriesTube(tube: UnderstoodTube): SeriesPart['tubes'][number][] {
  if (tube.conc_mM === null) return []
  return [{
    tubeNo: tube.tubeNo, label: tube.label, role: tube.role === 'aside' ? 'sample' : tube.role, conc_mM: tube.conc_mM, concSe_mM: tube.concSe_mM,
    points: tube.points, key: tube.key, place: tube.place,
  }]
}
