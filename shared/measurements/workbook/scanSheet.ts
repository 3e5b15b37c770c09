import { UPLOAD_LIMITS } from '../tabular/limits'
import { cellName } from '../tabular/place'
import { attribute, plainText, scanTags, type Tag } from './xml'

/** What a sheet's own text says beyond the values of its cells. Rows and columns from 1. */
export interface SheetScan {
  /** Largest row and column that any cell names. */
  rows: number
  columns: number
  formulas: { row: number, column: number, hasValue: boolean }[]
  errors: { row: number, column: number, text: string }[]
  /** Index of the cell's style, for cells that hold a number, by name. */
  styles: Map<string, number>
  merged: { top: number, left: number, bottom: number, right: number }[]
  cells: number
  /** The sheet's document again with nothing in it but the cells that hold something: far-off cells that only carry a format are gone. */
  bare: string
  /** First thing that no sheet can have: a cell without a place in the grid, or one over the limits. */
  fault: { row: number, column: number } | null
}

interface OpenCell { start: number, row: number, column: number, type: string, style: number | null, hasFormula: boolean, hasValue: boolean, value: string }

/** Walks through a sheet's document once. Stops noting at the limits of a table; what lies beyond is only counted. */
export function scanSheet(xml: string): SheetScan {
  const scan: SheetScan = { rows: 0, columns: 0, formulas: [], errors: [], styles: new Map(), merged: [], cells: 0, bare: '', fault: null }
  const kept: string[] = []
  let keptRow = 0
  let [opening, prefix] = ['', '']
  let [row, column] = [0, 0]
  let cell: OpenCell | null = null
  scanTags(xml, (tag) => {
    if (tag.name === 'worksheet' && !tag.isEnd) [opening, prefix] = [xml.slice(tag.start, tag.end), tag.prefix]
    else if (tag.name === 'row' && !tag.isEnd) {
      row = placeNumber(attribute(tag, 'r')) ?? row + 1
      column = 0
    }
    else if (tag.name === 'c' && !tag.isEnd) {
      const place = cellPlace(attribute(tag, 'r'))
      if (place !== null) row = place.row
      column = place?.column ?? column + 1
      cell = openCell(tag, row, column)
      if (tag.isEmpty) cell = null
    }
    else if (cell !== null && tag.name === 'f') cell.hasFormula = true
    else if (cell !== null && tag.name === 'v' && (tag.isEnd || tag.isEmpty)) {
      cell.hasValue = tag.isEnd && (tag.textBefore !== '' || cell.type === 'str')
      cell.value = plainText(tag.textBefore)
    }
    else if (cell !== null && tag.name === 't') cell.hasValue = true
    else if (cell !== null && tag.name === 'c' && tag.isEnd) {
      if (closeCell(cell, scan)) {
        if (cell.row !== keptRow) kept.push(`${keptRow === 0 ? '' : `</${prefix}row>`}<${prefix}row r="${cell.row}">`)
        keptRow = cell.row
        kept.push(xml.slice(cell.start, tag.end))
      }
      cell = null
    }
    else if (tag.name === 'mergeCell' && scan.merged.length < 5_000) scan.merged.push(...range(attribute(tag, 'ref')))
  })
  scan.bare = `${opening}<${prefix}sheetData>${kept.join('')}${keptRow === 0 ? '' : `</${prefix}row>`}</${prefix}sheetData></${prefix}worksheet>`
  return scan
}

function openCell(tag: Tag, row: number, column: number): OpenCell {
  const style = attribute(tag, 's')
  return { start: tag.start, row, column, type: attribute(tag, 't') ?? 'n', style: style === null ? null : Number(style), hasFormula: false, hasValue: false, value: '' }
}

/** @returns whether the cell holds anything that is kept */
function closeCell(cell: OpenCell, scan: SheetScan): boolean {
  const { row, column } = cell
  if (!cell.hasFormula && !cell.hasValue) return false
  scan.cells++
  scan.rows = Math.max(scan.rows, row)
  scan.columns = Math.max(scan.columns, column)
  if (!(row >= 1 && column >= 1 && row <= UPLOAD_LIMITS.rows && column <= UPLOAD_LIMITS.columns)) {
    scan.fault ??= { row, column }
    return false
  }
  // A formula that ended in an error has its own problem at the cell.
  if (cell.hasFormula && cell.type !== 'e') scan.formulas.push({ row, column, hasValue: cell.hasValue })
  if (cell.type === 'e') scan.errors.push({ row, column, text: cell.value === '' ? '#ERROR!' : cell.value.slice(0, 40) })
  else if (cell.style !== null && cell.type === 'n') scan.styles.set(cellName(row, column), cell.style)
  return cell.hasValue
}

const placeNumber = (text: string | null): number | null => text !== null && /^\d{1,9}$/.test(text) ? Number(text) : null

/** 'AB12' as row and column; null for what is no name of a cell. */
export function cellPlace(name: string | null): { row: number, column: number } | null {
  const match = /^\$?([A-Z]{1,4})\$?(\d{1,9})$/i.exec(name ?? '')
  if (!match) return null
  const column = [...(match[1] ?? '').toUpperCase()].reduce((sum, letter) => sum * 26 + letter.charCodeAt(0) - 64, 0)
  return { row: Number(match[2]), column }
}

function range(ref: string | null): SheetScan['merged'] {
  const [from, to] = (ref ?? '').split(':').map(cellPlace)
  return from && to && to.row >= from.row && to.column >= from.column ? [{ top: from.row, left: from.column, bottom: to.row, right: to.column }] : []
}
