import { createRandom } from '../../shared/science/random'
import { BROKEN_ARCHIVES, type Broken } from './brokenArchives'
import { SHEET_SHAPES } from './sheetShapes'
import { columnRows, joined, longRows, rowRows, TEXT_SHAPES, utf8 } from './tableShapes'

export interface Mutant { name: string, bytes: Uint8Array }

const LONG = longRows()
const at = (rows: readonly (readonly string[])[], row: number, column: number, text: string): string[][] => rows.map((cells, r) => cells.map((cell, c) => r === row && c === column ? text : cell))
const text = (name: string, content: string, says: RegExp = /./): Broken => ({ name, bytes: utf8(content), says })
const bad = (value: string): Broken => text(`${JSON.stringify(value)} among the signals`, joined(at(LONG, 5, 3, value)), /./)

const NOT_NUMBERS = ['NaN', 'nan', 'inf', '-Infinity', '∞', '1e999', '#DIV/0!', '#N/A', 'n/a', 'null', 'none', 'overflow', '<0.1', '> 5000', '1,234', '1.2.3', '12,34,56', '--5', '5-', '1e', 'e5', '0x1F', '1_000', '١٢٣', '½', '10^3', '1:30', '2026-03-02', 'ok', '?', '-', '.', ',', '"', '1 2', '12 34', '5 ms', '50 %', '=A1+1', '=cmd|\' /C calc\'!A0', '@SUM(1)', '+', 'TRUE', '<script>alert(1)</script>', '💥']
const NOT_TIMES = ['-50', 'late', '', 'NaN', '50 mM', '1e400', '-1e-9', '50 kg']
const NOT_CONCENTRATIONS = ['-1', 'much', '1 kg', 'NaN', '1e999', '<1', '0,5,1']

const PROSE: Broken[] = [
  text('nothing', ''), text('blanks', '  \n \n\t\n'), text('a letter', 'a'), text('prose', 'Dear all,\nthe phantom was fine.\n'), text('markup', '<html><body><table><tr><td>1</td></tr></table></body></html>'), text('JSON', '{"ti":[1,2,3],"s":[4,5,6]}'),
  text('a head alone', `${LONG[0]?.join(',')}\n`, /no rows of values/), text('numbers without a head', '1,2,3\n4,5,6\n7,8,9\n'), text('one column', LONG.map(row => row[3]).join('\n')), text('a cell with an open quotation mark', joined(LONG).replace('n1', '"n1'), /quotation mark|character/),
  text('ten thousand columns', `${Array.from({ length: 10_000 }, (_, i) => `t${i}`).join(',')}\n${'1,'.repeat(9999)}1\n`, /10000 columns/), text('three hundred thousand rows', `tube,conc (mM),TI (ms),signal\n${'a,1,50,3\n'.repeat(300_000)}`, /more than 50000 rows/),
  text('one line of eight million letters', 'a'.repeat(8_000_000), /8000000 characters|No table/), text('one line of commas', ','.repeat(2_000_000), /columns/), text('quotation marks alone', '"'.repeat(100_000)), text('line ends alone', '\n'.repeat(100_000)),
  text('more than eight megabytes', 'a,b\n'.repeat(2_200_000), /8 MB/), text('five hundred and one tubes', joined([['tube', 'conc (mM)', 'TI (ms)', 'signal'], ...Array.from({ length: 501 * 4 }, (_, i) => [`t${i >> 2}`, String((i >> 2) / 100), String((i & 3) * 100 + 5), '1'])]), /501 tubes/),
  text('a name of two hundred letters', joined(LONG.map(row => row.map(cell => cell === 'n1' ? 'x'.repeat(200) : cell))), /200 characters/), text('a cell of ten thousand letters', joined(at(LONG, 5, 0, 'y'.repeat(10_000))), /10000 characters/),
]

const STRUCTURE: Broken[] = [
  ...['TI', 'TI (mM)', 'TI (furlongs)', 'x', ''].map(head => text(`times headed ${JSON.stringify(head)}`, joined(at(LONG, 0, 2, head)))), ...['conc', 'conc (s)', 'conc (g/L)'].map(head => text(`concentrations headed ${JSON.stringify(head)}`, joined(at(LONG, 0, 1, head)))),
  text('two columns of signals', joined(LONG.map(row => [...row, row[3] ?? '']))), text('no signals', joined(LONG.map(row => row.slice(0, 3)))), text('no times', joined(LONG.map(row => [row[0] ?? '', row[1] ?? '', row[3] ?? '']))), text('no concentrations', joined(LONG.map(row => [row[0] ?? '', row[2] ?? '', row[3] ?? '']))),
  text('a row with more cells than the head', joined(LONG.map((row, r) => r === 7 ? [...row, '1', '2'] : row)), /cells, the head only/), text('decimal commas between commas', joined(columnRows()).replaceAll(/(\d)\.(\d)/g, '$1,$2')), text('one tube', joined(LONG.slice(0, 9))),
  text('equal concentrations', joined(LONG.map((row, r) => r === 0 ? row : ['n1', '1', row[2] ?? '', row[3] ?? '']))), text('a concentration that changes', joined(at(LONG, 12, 1, '7')), /'7' here/), text('constant signals', joined(LONG.map((row, r) => r === 0 ? row : [...row.slice(0, 3), '5']))), text('repeated heads of tubes', joined(at(columnRows(), 0, 3, '0.25 mM'))),
  text('a row per tube without concentrations', joined(rowRows().map(row => [row[0] ?? '', ...row.slice(2)]))), text('times of a row per tube that are words', joined(rowRows().map((row, r) => r === 0 ? row.map((cell, c) => c > 1 ? 'later' : cell) : row))),
]

const head = (...bytes: number[]): Uint8Array => Uint8Array.from([...bytes, ...Array.from({ length: 600 }, (_, i) => (i * 37) & 255)])
const NOT_TABLES: Broken[] = [
  { name: 'a PNG picture', bytes: head(0x89, 0x50, 0x4E, 0x47, 13, 10, 26, 10), says: /PNG/ }, { name: 'a JPEG picture', bytes: head(0xFF, 0xD8, 0xFF, 0xE0), says: /JPEG/ }, { name: 'a PDF', bytes: head(0x25, 0x50, 0x44, 0x46, 0x2D), says: /PDF/ },
  { name: 'an old or locked office document', bytes: head(0xD0, 0xCF, 0x11, 0xE0, 0xA1, 0xB1, 0x1A, 0xE1), says: /with a password/ }, { name: 'a gzip archive', bytes: head(0x1F, 0x8B, 8), says: /packed archive/ }, { name: 'a DICOM image', bytes: Uint8Array.from([...new Uint8Array(128), 0x44, 0x49, 0x43, 0x4D, 2, 0, 0, 0]), says: /no text has/ },
  { name: 'zeros', bytes: new Uint8Array(4096), says: /no text has/ }, { name: 'an executable', bytes: head(0x7F, 0x45, 0x4C, 0x46, 2, 1, 1, 0), says: /no text has/ }, { name: 'a table with a zero byte', bytes: utf8(joined(LONG).replace('n1', 'n\u00001')), says: /no text has/ }, { name: 'half a UTF-16 letter', bytes: Uint8Array.from([0xFF, 0xFE, 0x41]), says: /./ },
]

/** Files of which it is known that nothing of them can be stored. */
export const BROKEN: Broken[] = [
  ...PROSE, ...STRUCTURE, ...NOT_TABLES, ...BROKEN_ARCHIVES, ...NOT_NUMBERS.map(bad),
  ...NOT_TIMES.map(value => text(`${JSON.stringify(value)} among the times`, joined(at(LONG, 5, 2, value)))), ...NOT_CONCENTRATIONS.map(value => text(`${JSON.stringify(value)} for a concentration`, joined(LONG.map((row, r) => r > 8 && r <= 16 ? [row[0] ?? '', value, ...row.slice(2)] : row)))),
]

/** Good files with random damage: bytes changed, left out, doubled or put in, or the file cut short. Most are broken; none may bring anything down. */
export function mutants(count: number, seed = 'mutants of 2026'): Mutant[] {
  const random = createRandom(seed)
  const sources = [...TEXT_SHAPES, ...SHEET_SHAPES]
  return Array.from({ length: count }, (_, index) => {
    const source = sources[Math.floor(random.uniform() * sources.length)] ?? sources[0]!
    const place = () => Math.floor(random.uniform() * source.bytes.length)
    const how = Math.floor(random.uniform() * 5)
    if (how === 0) return { name: `${index}: ${source.name}, cut short`, bytes: source.bytes.slice(0, place()) }
    const bytes = [...source.bytes]
    const times = 1 + Math.floor(random.uniform() * 6)
    for (let i = 0; i < times; i++) {
      const where = Math.min(place(), bytes.length - 1)
      if (how === 1) bytes[where] = Math.floor(random.uniform() * 256)
      else if (how === 2) bytes.splice(where, 1 + Math.floor(random.uniform() * 30))
      else if (how === 3) bytes.splice(where, 0, ...bytes.slice(where, where + 1 + Math.floor(random.uniform() * 60)))
      else bytes.splice(where, 0, ...utf8([',', ';', '\t', '"', '\n', '#', '-', '.', 'e', 'NaN', '\u0000', '<', '='][Math.floor(random.uniform() * 13)] ?? ','))
    }
    return { name: `${index}: ${source.name}, ${['', 'changed', 'thinned', 'doubled', 'put into'][how]}`, bytes: Uint8Array.from(bytes) }
  })
}
