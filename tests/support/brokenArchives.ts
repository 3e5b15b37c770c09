import { strFromU8, strToU8, zipSync } from 'fflate'
import { longRows } from './tableShapes'
import { packed, workbook, workbookParts, type HandCell } from './workbookFiles'

/** An upload that cannot be stored, and words that must be said of it. */
export interface Broken { name: string, bytes: Uint8Array, says: RegExp }

const ROWS: HandCell[][] = longRows().map(row => row.map(cell => /^-?[\d.]+$/.test(cell) ? Number(cell) : cell))
const PARTS = workbookParts([{ name: 'Signals', rows: ROWS }])
const SHEET = 'xl/worksheets/sheet1.xml'
const withSheet = (change: (xml: string) => string): Uint8Array => packed({ ...PARTS, [SHEET]: strToU8(change(strFromU8(PARTS[SHEET]!))) })
const withPart = (name: string, text: string): Uint8Array => packed({ ...PARTS, [name]: strToU8(text) })
const without = (name: string): Uint8Array => packed(Object.fromEntries(Object.entries(PARTS).filter(([key]) => key !== name)))
const cell = (xml: string) => withSheet(sheet => sheet.replace(/<c r="D5">.*?<\/c>/, xml))

/** A good archive with bytes of its directory or of its first entry changed. @param at offset behind the signature */
function patched(signature: number, at: number, values: readonly number[]): Uint8Array {
  const bytes = workbook([{ name: 'Signals', rows: ROWS }]).slice()
  const view = new DataView(bytes.buffer)
  for (let i = bytes.length - 22; i >= 0; i--) {
    if (view.getUint32(i, true) !== signature) continue
    bytes.set(values, i + at)
    return bytes
  }
  throw new Error('The archive has no such record.')
}

const [CENTRAL, END] = [0x02014B50, 0x06054B50]
const entries = (names: readonly string[]): Uint8Array => zipSync(Object.fromEntries(names.map(name => [name, strToU8('x')])))
const named = (name: string): Uint8Array => zipSync({ ...PARTS, [name]: strToU8('<a/>') })
const zeros = (bytes: number) => new Uint8Array(bytes)

export const BROKEN_ARCHIVES: Broken[] = [
  { name: 'a bomb of one entry', bytes: packed({ ...PARTS, 'xl/sharedStrings.xml': zeros(40 * 1024 * 1024) }), says: /grows \d+ times/ },
  { name: 'a bomb of many entries', bytes: packed({ ...PARTS, ...Object.fromEntries(Array.from({ length: 90 }, (_, i) => [`xl/${i}.xml`, zeros(1024 * 1024)])) }), says: /more than \d+ bytes when inflated/ },
  { name: 'an entry that declares less than it holds', bytes: patched(CENTRAL, 24, [10, 0, 0, 0]), says: /damaged/ },
  { name: 'an entry that declares gigabytes', bytes: patched(CENTRAL, 24, [0xFF, 0xFF, 0xFF, 0x7F]), says: /would have \d+ bytes/ },
  { name: 'five thousand entries', bytes: entries(Array.from({ length: 5000 }, (_, i) => `f${i}.xml`)), says: /5000 entries/ },
  { name: 'an encrypted entry', bytes: patched(CENTRAL, 8, [1, 0]), says: /password/ },
  { name: 'an unknown method of packing', bytes: patched(CENTRAL, 10, [99, 0]), says: /method 99/ },
  { name: 'a wrong checksum', bytes: patched(CENTRAL, 16, [1, 2, 3, 4]), says: /damaged/ },
  { name: 'an entry far behind the end', bytes: patched(CENTRAL, 42, [0xFF, 0xFF, 0xFF, 0x0F]), says: /damaged/ },
  { name: 'a directory far behind the end', bytes: patched(END, 16, [0xFF, 0xFF, 0xFF, 0x0F]), says: /directory of the workbook is damaged/ },
  { name: 'a count that is not true', bytes: patched(END, 10, [0xFF, 0x00]), says: /directory of the workbook is damaged/ },
  { name: 'the 64-bit form', bytes: patched(END, 10, [0xFF, 0xFF]), says: /64-bit/ },
  ...['../../etc/passwd.xml', '/etc/cron.xml', 'xl\\..\\evil.xml', 'C:/evil.xml', 'xl/a\u0000b.xml'].map(name => ({ name: `an entry named ${JSON.stringify(name)}`, bytes: named(name), says: /leads out of it/ })),
  { name: 'an empty archive', bytes: zipSync({}), says: /directory is missing|empty archive|cut short|No table|no text/ },
  { name: 'a folder of files', bytes: entries(['a.csv', 'b.csv']), says: /packed folder of files/ },
  { name: 'a workbook in an archive', bytes: zipSync({ 'inner.xlsx': workbook([{ name: 'Signals', rows: ROWS }]) }), says: /packed folder of files/ },
  { name: 'an OpenDocument sheet', bytes: entries(['mimetype', 'content.xml']), says: /OpenDocument/ },
  { name: 'a text document', bytes: entries(['[Content_Types].xml', 'word/document.xml']), says: /without sheets/ },
  { name: 'a binary workbook', bytes: entries(['[Content_Types].xml', 'xl/workbook.bin']), says: /XLSB/ },
  { name: 'pictures', bytes: entries(['a.png', 'b.png']), says: /without a workbook/ },
  { name: 'no list of sheets', bytes: without('xl/workbook.xml'), says: /without a workbook/ },
  { name: 'no relations', bytes: without('xl/_rels/workbook.xml.rels'), says: /no sheet/ },
  { name: 'no sheet', bytes: without(SHEET), says: /no sheet/ },
  { name: 'a sheet outside the archive', bytes: withPart('xl/_rels/workbook.xml.rels', '<Relationships><Relationship Id="r1" Type="x/worksheet" TargetMode="External" Target="https://example.org/sheet1.xml"/></Relationships>'), says: /no sheet/ },
  { name: 'a sheet above the archive', bytes: withPart('xl/_rels/workbook.xml.rels', '<Relationships><Relationship Id="r1" Type="x/worksheet" Target="../../../sheet1.xml"/></Relationships>'), says: /no sheet/ },
  { name: 'entities of its own', bytes: withSheet(xml => `<!DOCTYPE a [<!ENTITY b "${'c'.repeat(100)}">]>${xml}`), says: /entities of its own/ },
  { name: 'an entity of a file', bytes: withPart('xl/sharedStrings.xml', '<!DOCTYPE a [<!ENTITY b SYSTEM "file:///etc/passwd">]><sst><si><t>&b;</t></si></sst>'), says: /entities of its own/ },
  { name: 'a sheet in UTF-16', bytes: packed({ ...PARTS, [SHEET]: Uint8Array.from([...strFromU8(PARTS[SHEET]!)].flatMap(sign => [sign.charCodeAt(0), 0])) }), says: /no plain UTF-8/ },
  { name: 'a sheet that ends in the middle', bytes: withSheet(xml => xml.slice(0, Math.floor(xml.length / 8))), says: /./ },
  { name: 'a sheet without cells', bytes: withSheet(() => '<worksheet><sheetData/></worksheet>'), says: /No table|no row/ },
  { name: 'a sheet of other elements', bytes: withSheet(() => '<html><body>no sheet</body></html>'), says: /./ },
  { name: 'a hundred thousand open cells', bytes: withSheet(() => `<worksheet><sheetData><row>${'<c r="A1">'.repeat(100_000)}`), says: /./ },
  { name: 'deep elements', bytes: withSheet(() => `<worksheet>${'<a>'.repeat(200_000)}`), says: /./ },
  { name: 'a cell in row 0', bytes: cell('<c r="D0"><v>1</v></c>'), says: /./ },
  { name: 'a cell in the last row a sheet can have', bytes: withSheet(xml => xml.replace('</sheetData>', '<row r="1048576"><c r="A1048576"><v>1</v></c></row></sheetData>')), says: /row 1048576/ },
  { name: 'a cell in a column far out', bytes: cell('<c r="XFD5"><v>1</v></c>'), says: /column 16384/ },
  { name: 'a cell far out whose place is written over two lines', bytes: cell('<c r\n=\n"XFD5"><v>1</v></c>'), says: /column 16384/ },
  { name: 'a shared text that is not there', bytes: cell('<c r="D5" t="s"><v>99</v></c>'), says: /./ },
  { name: 'rows in disorder', bytes: withSheet(xml => xml.replace('<row r="3">', '<row r="30">').replaceAll(/"([A-D])3"/g, '"$130"')), says: /cannot be read/ },
  { name: 'a formula never calculated', bytes: cell('<c r="D5"><f>A1*2</f></c>'), says: /D5 holds a formula whose value is not stored/ },
  ...['#DIV/0!', '#N/A', '#REF!', '#VALUE!', '#NAME?', '#NUM!'].map(error => ({ name: `the error ${error}`, bytes: cell(`<c r="D5" t="e"><f>1/0</f><v>${error}</v></c>`), says: new RegExp(error.replace(/[?/]/g, '\\$&')) })),
  { name: 'a day among the signals', bytes: packed({ ...workbookParts([{ name: 'Signals', rows: ROWS }], { styles: '<styleSheet><cellXfs><xf numFmtId="0"/><xf numFmtId="14"/></cellXfs></styleSheet>' }), [SHEET]: strToU8(strFromU8(PARTS[SHEET]!).replace(/<c r="D5">/, '<c r="D5" s="1">')) }), says: /is not a number/ },
  { name: 'a truth value among the signals', bytes: cell('<c r="D5" t="b"><v>1</v></c>'), says: /'TRUE' is not a number/ },
  { name: 'a number that is none', bytes: cell('<c r="D5"><v>abc</v></c>'), says: /./ },
  { name: 'a number beyond all doubles', bytes: cell('<c r="D5"><v>1e999</v></c>'), says: /./ },
  { name: 'a type that does not exist', bytes: cell('<c r="D5" t="zz"><v>1</v></c>'), says: /./ },
  { name: 'a cell of a million letters', bytes: cell(`<c r="D5" t="inlineStr"><is><t>${'a'.repeat(1_000_000)}</t></is></c>`), says: /characters/ },
  { name: 'seventy sheets', bytes: workbook(Array.from({ length: 70 }, (_, i) => ({ name: `S${i}`, rows: ROWS.slice(0, 3) }))), says: /70 sheets/ },
  { name: 'joined cells over the whole sheet', bytes: workbook([{ name: 'Signals', rows: ROWS.slice(0, 2), after: `<mergeCells>${'<mergeCell ref="A1:A1048576"/>'.repeat(2000)}</mergeCells>` }]), says: /./ },
]
