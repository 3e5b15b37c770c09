import { columnRows, longRows, PHANTOM, type Shape } from './tableShapes'
import { STYLES, workbook, type HandCell, type HandSheet } from './workbookFiles'

/** Text that is a number becomes one. */
const numbers = (rows: readonly (readonly string[])[]): HandCell[][] => rows.map(row => row.map(cell => cell === '' ? null : /^-?[\d.]+$/.test(cell) ? Number(cell) : cell))
const LONG = numbers(longRows())
const WIDE = numbers(columnRows())
const PAIRS: HandCell[][] = [['Field', '3 T'], ['Temperature', '37 °C'], ['pH', 7.4], ['Date', { xml: '<c r="@" s="1"><v>46083</v></c>' }], ['Concentration, common error', { xml: '<c r="@" s="2"><v>0.015</v></c>' }]]
const FORM = { instrument: 'Scanner 2', medium: 'plasma', concBasis: 'icp', timing: 'longTr', signalForm: 'signed' } as const

const formula = (value: HandCell): HandCell => typeof value === 'number' ? { xml: `<c r="@"><f>ROUND(${value},1)</f><v>${value}</v></c>` } : value
const styled = (value: HandCell): HandCell => typeof value === 'number' ? { xml: `<c r="@" s="3"><v>${value}</v></c>` } : value
const asText = (value: HandCell): HandCell => typeof value === 'number' ? String(value).replace('.', ',') : value
const sheet = (rows: HandCell[][], rest: Partial<HandSheet> = {}): HandSheet => ({ name: 'Signals', rows, ...rest })
const far = (rows: HandCell[][]): HandCell[][] => rows.map((row, i) => i === 0 ? [...row, { xml: '<c r="XFD1" s="3"/>' }] : row)
/** Tube and concentration once for all rows of a tube, as joined cells leave them. */
const once = LONG.map((row, i) => (i - 1) % PHANTOM.ti_ms.length === 0 || i === 0 ? row : [null, null, ...row.slice(2)])
const merges = PHANTOM.conc_mM.flatMap((_, j) => ['A', 'B'].map(letter => `<mergeCell ref="${letter}${2 + j * 8}:${letter}${9 + j * 8}"/>`)).join('')

export const SHEET_SHAPES: Shape[] = [
  { name: 'a row per point, texts in their cells', bytes: workbook([sheet(LONG)]) },
  { name: 'a row per point, texts in the shared list', bytes: workbook([sheet(LONG)], { strings: 'shared' }) },
  { name: 'a column per tube', bytes: workbook([sheet(WIDE)], { strings: 'shared' }) },
  { name: 'numbers shown with two decimals and stored with more', bytes: workbook([sheet(WIDE.map(row => row.map(styled)))], { styles: STYLES }) },
  { name: 'numbers kept as text with decimal commas', bytes: workbook([sheet(WIDE.map(row => row.map(asText)))]) },
  { name: 'values of formulas', bytes: workbook([sheet(WIDE.map((row, i) => i === 0 ? row : row.map(formula)))]), asks: ['formulas'] },
  { name: 'joined cells down the columns of names', bytes: workbook([sheet(once, { after: `<mergeCells>${merges}</mergeCells>` })]), asks: ['merged'] },
  { name: 'a title over joined columns', bytes: workbook([sheet([['Phantom of the second day', null, null], [], ...WIDE], { after: '<mergeCells><mergeCell ref="A1:F1"/></mergeCells>' })]) },
  { name: 'a head over two rows, its cells joined', bytes: workbook([sheet([['TI (ms)', 'Signal', null, null, null, null], [null, ...(WIDE[0] ?? []).slice(1)], ...WIDE.slice(1)], { after: '<mergeCells><mergeCell ref="A1:A2"/><mergeCell ref="B1:F1"/></mergeCells>' })]) },
  { name: 'a title, a head and a row of units', bytes: workbook([sheet([['Second day'], [], ['TI', ...(WIDE[0] ?? []).slice(1)], ['ms', 'au', 'au', 'au', 'au', 'au'], ...WIDE.slice(1)])]) },
  { name: 'a table that begins in C5', bytes: workbook([sheet([[], [], [], [], ...WIDE.map(row => [null, null, ...row])])]) },
  { name: 'a hidden sheet before it', bytes: workbook([{ name: 'Old', rows: LONG.slice(0, 20), state: 'hidden' }, sheet(LONG)]) },
  { name: 'a sheet of notes before it', bytes: workbook([{ name: 'Read me', rows: [['Signals of the second day'], ['Nothing else']] }, sheet(LONG)]) },
  { name: 'conditions on a sheet of their own', bytes: workbook([sheet(LONG), { name: 'Conditions', rows: PAIRS }], { styles: STYLES }), draft: { conditions: FORM }, conditions: { b0_T: 3, pH: 7.4, concScaleError_frac: 0.015 } },
  { name: 'days counted from 1904', bytes: workbook([sheet(LONG), { name: 'Conditions', rows: PAIRS }], { styles: STYLES, date1904: true }), draft: { conditions: FORM }, conditions: { b0_T: 3 } },
  { name: 'conditions in cells above the table', bytes: workbook([sheet([...PAIRS, [], ...LONG])], { styles: STYLES }), draft: { conditions: FORM }, conditions: { b0_T: 3, pH: 7.4, concScaleError_frac: 0.015 } },
  { name: 'a format in the last cell that a sheet can have', bytes: workbook([sheet(far(LONG), { after: '' })], { styles: STYLES }) },
  { name: 'names of elements with a prefix', bytes: workbook([sheet(LONG)], { prefix: 'x' }) },
  { name: 'truth values in a column that is not read', bytes: workbook([sheet(LONG.map((row, i) => [...row, i === 0 ? 'kept' : true]))]) },
  { name: 'another sheet chosen', bytes: workbook([{ name: 'First', rows: LONG.map(row => row.map(cell => typeof cell === 'number' ? cell + 1 : cell)) }, sheet(LONG)]), draft: { sheet: 'Signals' } },
  { name: 'two tables, the larger one read', bytes: workbook([sheet(LONG), { name: 'Second', rows: LONG.slice(0, 17) }]), asks: ['severalSheets'] },
  { name: 'macros beside it', bytes: workbook([sheet(LONG)], { extra: { 'xl/vbaProject.bin': new Uint8Array([1, 2, 3]) } }), asks: ['macros'] },
  { name: 'links to other files beside it', bytes: workbook([sheet(LONG)], { extra: { 'xl/externalLinks/externalLink1.xml': new TextEncoder().encode('<externalLink/>') } }), asks: ['externalLinks'] },
]
