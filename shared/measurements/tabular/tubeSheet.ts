import type { Conditions, UploadProblem } from '../types'
import { plainWords } from './headerText'
import type { FoundCondition } from './metadata'
import { asks, quoted } from './problem'
import type { UnderstoodTube } from './understood'

/** A tube of a tube sheet: what was planned and pipetted before anything was measured. */
export interface SheetTube { tubeNo: number, label: string, role: 'sample' | 'blank' | 'reference', agent: string | null, lot: string | null, conc_mM: number | null, concSe_mM: number | null }

/** What a tube sheet says of a measurement; it counts where neither the person nor the file says anything. */
export interface SheetFacts { code: string, kind: string, conditions: Conditions, tubes: readonly SheetTube[] }

/** The tube of the sheet that a name in the file means: the same name, or its number ('3', 'tube 3', 'T3'). */
export function onSheet(label: string, sheet: SheetFacts | null): SheetTube | null {
  if (sheet === null) return null
  const words = plainWords(label)
  const number = /^(?:tube|vial|sample|t|v|no|nr|number|#|roi|region)?[\s.:]*0*(\d{1,4})$/.exec(words)?.[1]
  return sheet.tubes.find(tube => plainWords(tube.label) === words) ?? sheet.tubes.find(tube => String(tube.tubeNo) === number) ?? null
}

export function sheetFound(sheet: SheetFacts | null): FoundCondition[] {
  if (sheet === null) return []
  return Object.entries(sheet.conditions).flatMap(([key, value]) => value === null ? [] : [{ key, value, place: `tube sheet ${sheet.code}`, text: String(value) }])
}

/** Tubes of the file that the sheet does not know, and those of the sheet that are not in the file. */
export function sheetProblems(sheet: SheetFacts | null, tubes: readonly UnderstoodTube[], rawLabels: ReadonlyMap<string, string>): UploadProblem[] {
  if (sheet === null || tubes.length === 0) return []
  const used = new Map(tubes.map(tube => [tube.key, onSheet(rawLabels.get(tube.key) ?? tube.label, sheet)]))
  const strange = tubes.filter(tube => used.get(tube.key) === null && tube.role !== 'aside')
  const absent = sheet.tubes.filter(tube => ![...used.values()].includes(tube))
  const listed = (names: readonly string[]) => `${names.slice(0, 8).map(quoted).join(', ')}${names.length > 8 ? ` and ${names.length - 8} more` : ''}`
  return [
    ...(strange.length === 0 ? [] : [asks('notOnTubeSheet', `Tube sheet ${sheet.code} has no tube called ${listed(strange.map(tube => tube.label))}.`, 'tubes named or numbered as on the sheet, or as they are', { field: 'tubeSheet' })]),
    ...(absent.length === 0 ? [] : [asks('missingFromFile', `The file has no points of ${listed(absent.map(tube => tube.label))}, which tube sheet ${sheet.code} lists.`, 'the file as it is, or one with every tube', { field: 'tubeSheet' })]),
  ]
}
