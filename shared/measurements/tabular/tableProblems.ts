import type { UploadDraft } from '../draft'
import type { MeasurementKind, UploadProblem } from '../types'
import { acceptedUnits } from './columns'
import type { FoundCondition } from './metadata'
import { asks, blocks, quoted } from './problem'
import { widthProblems, type TableStructure } from './structure'
import { tailProblems } from './tail'
import type { Understood } from './understood'

export function decimalDoubt({ text, row, column }: { text: string, row: number, column: number }): UploadProblem {
  return asks('decimalDoubt', `${quoted(text)} can be a number with a decimal comma or one with thousands: the comma is taken for the decimal mark.`, 'the decimal mark chosen, and thousands parted by spaces', { row, column })
}

/** Places that say different things of one condition, unless a person has said what counts. */
export function contradictions(found: readonly FoundCondition[], kind: MeasurementKind, draft: UploadDraft): UploadProblem[] {
  return kind.conditions.flatMap((spec) => {
    const [first, ...others] = found.filter(one => one.key === spec.key)
    const other = others.find(one => one.value !== first?.value)
    if (first === undefined || other === undefined || Object.hasOwn(draft.conditions ?? {}, spec.key)) return []
    return [asks('contradiction', `${spec.label}: ${first.place} says ${quoted(first.text)}, ${other.place} says ${quoted(other.text)}; the first counts.`, 'the value typed, or as it is', { field: `conditions.${spec.key}` })]
  })
}

export function noTable(isSheet: boolean): UploadProblem {
  return isSheet
    ? blocks('noTable', 'No table found: no row of the sheet has two cells.', 'a sheet with heads in a row and numbers beneath; choose the sheet')
    : blocks('noTable', 'No table found: no line has two columns.', 'commas, semicolons or tabs between columns, the same number in every row')
}

export function structureProblems(structure: TableStructure): UploadProblem[] {
  const { header, body, isTransposed } = structure
  const problems = [...widthProblems(structure), ...tailProblems(structure.summaries)]
  if (header === null && !isTransposed) problems.push(asks('noHeader', 'No row was recognised as the head of the table.', 'the row of heads chosen, or the columns chosen one by one'))
  if (body.length === 0 && !isTransposed) problems.push(blocks('noValues', 'The table has a head and no rows of values.', 'at least one row of numbers beneath the head', { row: header?.row ?? null }))
  return problems
}

export function looseProblem({ stem, label, place }: Understood['looseUnits'][number], kind: MeasurementKind): UploadProblem {
  const spec = kind.columns.find(candidate => candidate.stem === stem)
  const row = /\d+/.exec(place)?.[0]
  return blocks('unit', `${label} (${place}): no unit that is known for it.`, spec ? acceptedUnits(spec) : 'a unit', { row: row === undefined ? null : Number(row), field: `units.${stem}` })
}
