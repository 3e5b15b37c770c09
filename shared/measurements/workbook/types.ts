import type { UploadProblem } from '../types'

/** A cell with its place, from 1. */
export interface CellPlace { row: number, column: number }

/** One sheet as its cells stand: numbers as stored, not as displayed. */
export interface SheetGrid {
  name: string
  isHidden: boolean
  rows: (string | number | boolean | null)[][]
  /** Cells that hold a formula; without a value where none was stored with it. */
  formulas: (CellPlace & { hasValue: boolean })[]
  /** Cells that hold an error value such as #DIV/0!. */
  errors: (CellPlace & { text: string })[]
}

export type WorkbookRead = { ok: true, sheets: SheetGrid[] } | { ok: false, problem: UploadProblem }
