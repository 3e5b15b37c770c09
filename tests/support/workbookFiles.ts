import { strToU8, zipSync, type Zippable } from 'fflate'

/** A cell of a workbook written by hand: a value, or its document as it stands. */
export type HandCell = string | number | boolean | null | { xml: string }
export interface HandSheet { name: string, rows: HandCell[][], state?: 'hidden' | 'veryHidden', after?: string }
export interface HandOptions { strings?: 'shared' | 'inline', styles?: string, prefix?: string, date1904?: boolean, extra?: Record<string, Uint8Array> }

const REL = 'http://schemas.openxmlformats.org/officeDocument/2006/relationships'
const MAIN = 'http://schemas.openxmlformats.org/spreadsheetml/2006/main'

const escaped = (text: string): string => text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('"', '&quot;')
export const letters = (index: number): string => (index >= 26 ? letters(Math.floor(index / 26) - 1) : '') + String.fromCharCode(65 + index % 26)

/** Parts of a workbook (ECMA-376) written by hand, so that a test can change any of them before they are packed. */
export function workbookParts(sheets: readonly HandSheet[], { strings = 'inline', styles, prefix = '', date1904 = false, extra = {} }: HandOptions = {}): Record<string, Uint8Array> {
  const shared: string[] = []
  const p = prefix === '' ? '' : `${prefix}:`
  const text = (value: string, at: string): string => {
    if (strings === 'inline') return `<${p}c r="${at}" t="inlineStr"><${p}is><${p}t>${escaped(value)}</${p}t></${p}is></${p}c>`
    if (!shared.includes(value)) shared.push(value)
    return `<${p}c r="${at}" t="s"><${p}v>${shared.indexOf(value)}</${p}v></${p}c>`
  }
  const cell = (value: HandCell, at: string): string => {
    if (value === null) return ''
    if (typeof value === 'object') return value.xml.replaceAll('@', at)
    if (typeof value === 'number') return `<${p}c r="${at}"><${p}v>${value}</${p}v></${p}c>`
    return typeof value === 'boolean' ? `<${p}c r="${at}" t="b"><${p}v>${value ? 1 : 0}</${p}v></${p}c>` : text(value, at)
  }
  const sheetXml = ({ rows, after = '' }: HandSheet): string => `<?xml version="1.0" encoding="UTF-8"?><${p}worksheet xmlns${prefix === '' ? '' : `:${prefix}`}="${MAIN}"><${p}sheetData>${
    rows.map((row, i) => `<${p}row r="${i + 1}">${row.map((value, j) => cell(value, `${letters(j)}${i + 1}`)).join('')}</${p}row>`).join('')}</${p}sheetData>${after}</${p}worksheet>`
  const files = Object.fromEntries(sheets.map((sheet, i) => [`xl/worksheets/sheet${i + 1}.xml`, strToU8(sheetXml(sheet))]))
  const list = sheets.map((sheet, i) => `<sheet name="${escaped(sheet.name)}" sheetId="${i + 1}" r:id="r${i + 1}"${sheet.state ? ` state="${sheet.state}"` : ''}/>`).join('')
  const relations = [...sheets.map((_, i) => `<Relationship Id="r${i + 1}" Type="${REL}/worksheet" Target="worksheets/sheet${i + 1}.xml"/>`),
    ...(strings === 'shared' ? [`<Relationship Id="rs" Type="${REL}/sharedStrings" Target="sharedStrings.xml"/>`] : []),
    ...(styles ? [`<Relationship Id="ry" Type="${REL}/styles" Target="styles.xml"/>`] : [])].join('')
  return {
    '[Content_Types].xml': strToU8('<Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types"><Default Extension="xml" ContentType="application/xml"/></Types>'),
    '_rels/.rels': strToU8(`<Relationships><Relationship Id="r1" Type="${REL}/officeDocument" Target="xl/workbook.xml"/></Relationships>`),
    'xl/workbook.xml': strToU8(`<workbook xmlns="${MAIN}" xmlns:r="${REL}"><workbookPr${date1904 ? ' date1904="1"' : ''}/><sheets>${list}</sheets></workbook>`),
    'xl/_rels/workbook.xml.rels': strToU8(`<Relationships>${relations}</Relationships>`),
    ...files,
    ...(strings === 'shared' ? { 'xl/sharedStrings.xml': strToU8(`<sst xmlns="${MAIN}">${shared.map(value => `<si><t>${escaped(value)}</t></si>`).join('')}</sst>`) } : {}),
    ...(styles ? { 'xl/styles.xml': strToU8(styles) } : {}),
    ...extra,
  }
}

export const packed = (parts: Zippable): Uint8Array => zipSync(parts, { level: 6, mtime: new Date('2026-03-02T09:00:00Z') })
export const workbook = (sheets: readonly HandSheet[], options?: HandOptions): Uint8Array => packed(workbookParts(sheets, options))

/** Styles 0 plain, 1 a day, 2 per cent, 3 two decimals. */
export const STYLES = `<styleSheet xmlns="${MAIN}"><cellXfs count="4"><xf numFmtId="0"/><xf numFmtId="14"/><xf numFmtId="10"/><xf numFmtId="2"/></cellXfs></styleSheet>`
