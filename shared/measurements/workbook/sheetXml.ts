import type { CellPlace, SheetGrid } from './types'

/** What read values leave out: which sheets there are, hidden ones too, and which cells hold formulas or errors. */
export interface SheetPart { name: string, isHidden: boolean, path: string }

const decode = (bytes: Uint8Array | undefined): string => bytes === undefined ? '' : new TextDecoder().decode(bytes)
const ENTITIES: Readonly<Record<string, string>> = { amp: '&', lt: '<', gt: '>', quot: '"', apos: '\'' }

/** Text of an XML attribute. */
export function unescapeXml(text: string): string {
  return text.replace(/&(?:#x([0-9a-f]{1,6})|#(\d{1,7})|(\w+));/gi, (whole, hex: string | undefined, decimal: string | undefined, name: string | undefined) => {
    if (name !== undefined) return ENTITIES[name] ?? whole
    const code = hex === undefined ? Number(decimal) : Number.parseInt(hex, 16)
    return code <= 0x10FFFF ? String.fromCodePoint(code) : whole
  })
}

const attribute = (tag: string, name: string): string | null => {
  const match = new RegExp(`\\s${name}\\s*=\\s*(?:"([^"]*)"|'([^']*)')`).exec(tag)
  return match ? unescapeXml(match[1] ?? match[2] ?? '') : null
}

/** Sheets in the order of the workbook, with the entry that holds each. */
export function sheetParts(entries: ReadonlyMap<string, Uint8Array>): SheetPart[] {
  const targets = new Map([...decode(entries.get('xl/_rels/workbook.xml.rels')).matchAll(/<Relationship\b[^>]*>/g)].map(([tag]) => [attribute(tag, 'Id') ?? '', attribute(tag, 'Target') ?? '']))
  return [...decode(entries.get('xl/workbook.xml')).matchAll(/<(?:\w+:)?sheet\b[^>]*>/g)].flatMap(([tag]) => {
    const target = targets.get(attribute(tag, '(?:\\w+:)?id') ?? '')
    const name = attribute(tag, 'name')
    if (target === undefined || name === null) return []
    const path = target.startsWith('/') ? target.slice(1) : `xl/${target.replace(/^\.\//, '')}`
    return [{ name, isHidden: /^(?:hidden|veryHidden)$/.test(attribute(tag, 'state') ?? ''), path }]
  })
}

/** 'AB12' as row and column from 1; null for anything else. */
export function cellPlace(reference: string): CellPlace | null {
  const match = /^([A-Z]{1,3})(\d{1,7})$/.exec(reference)
  if (!match) return null
  const column = [...match[1] ?? ''].reduce((sum, letter) => 26 * sum + letter.charCodeAt(0) - 64, 0)
  return { row: Number(match[2]), column }
}

/** Formula and error cells of one sheet. */
export function markedCells(xml: Uint8Array | undefined): Pick<SheetGrid, 'formulas' | 'errors'> {
  const formulas: SheetGrid['formulas'] = []
  const errors: SheetGrid['errors'] = []
  for (const [, tag = '', body = ''] of decode(xml).matchAll(/<(?:\w+:)?c\b([^>]*?)(?:\/>|>([\s\S]*?)<\/(?:\w+:)?c>)/g)) {
    const place = cellPlace(attribute(` ${tag}`, 'r') ?? '')
    if (place === null) continue
    const value = /<(?:\w+:)?v[^>]*>([\s\S]*?)<\/(?:\w+:)?v>/.exec(body)?.[1] ?? ''
    if (/<(?:\w+:)?f[\s>/]/.test(body)) formulas.push({ ...place, hasValue: value !== '' })
    if (attribute(` ${tag}`, 't') === 'e') errors.push({ ...place, text: unescapeXml(value) })
  }
  return { formulas, errors }
}
