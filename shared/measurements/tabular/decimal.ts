import { parseNumberCell, type DecimalMark } from './numberCell'
import type { TableRecord } from './records'

export interface DecimalGuess {
  decimal: DecimalMark
  /** True where every comma could as well part thousands ('1,234'). */
  isAmbiguous: boolean
  /** First cell that shows the doubt. */
  example: { text: string, row: number, column: number } | null
}

/** The decimal mark that most numbers of a table are written with. */
export function sniffDecimal(records: readonly TableRecord[]): DecimalGuess {
  let points = 0
  let commas = 0
  let plainCommas = 0
  let example: DecimalGuess['example'] = null
  for (const record of records) {
    record.cells.forEach((cell, index) => {
      if (record.isNumber?.[index] || cell.length > 40 || !/[.,]/.test(cell)) return
      if (parseNumberCell(cell, 'point').ok) points++
      else if (parseNumberCell(cell, 'comma').ok) {
        commas++
        if (!/^[-+]?[1-9]\d{0,2},\d{3}$/.test(cell)) plainCommas++
        else example ??= { text: cell, row: record.row, column: index + 1 }
      }
    })
  }
  if (commas <= points) return { decimal: 'point', isAmbiguous: false, example: null }
  const isAmbiguous = plainCommas === 0
  return { decimal: 'comma', isAmbiguous, example: isAmbiguous ? example : null }
}
