import type { UploadDraft } from '../../shared/measurements/draft'

export interface Shape { name: string, bytes: Uint8Array, draft?: UploadDraft, conditions?: Record<string, unknown>, asks?: string[], encoding?: string }

/** Signals of five tubes, S = 1000·(1 − 1.94·e^(−TI/T1)) with 1/T1 = 0.55 + 4.2·c, rounded to 0.1 and raised so that thousands occur; invented. */
const TI_MS = [25, 50, 100, 250, 500, 1000, 2500, 9000]
const CONC_MM = [0, 0.25, 0.5, 1, 2]
export const PHANTOM = {
  ti_ms: TI_MS, conc_mM: CONC_MM,
  signals: CONC_MM.map(conc => TI_MS.map(ti => Math.round(15000 * (1 - 1.94 * Math.exp(-ti / 1000 * (0.55 + 4.2 * conc)))) / 10)),
}

export const utf8 = (text: string): Uint8Array => new TextEncoder().encode(text)
const wide = (text: string, littleEndian: boolean, mark: boolean): Uint8Array => {
  const units = [...(mark ? '\uFEFF' : ''), ...text].flatMap(sign => [...sign].map(one => one.charCodeAt(0)))
  return Uint8Array.from(units.flatMap(unit => littleEndian ? [unit & 255, unit >> 8] : [unit >> 8, unit & 255]))
}
const western = (text: string): Uint8Array => Uint8Array.from([...text].map(sign => sign.charCodeAt(0)))

type Number = (value: number) => string
const plain: Number = String
const comma: Number = value => String(value).replace('.', ',')
const grouped = (group: string, decimal = '.'): Number => (value) => {
  const [whole = '', part] = Math.abs(value).toFixed(1).split('.')
  return `${value < 0 ? '-' : ''}${whole.replace(/\B(?=(\d{3})+$)/g, group)}${decimal}${part}`
}

interface How { mark?: string, time?: Number, conc?: Number, signal?: Number, x?: string, c?: string, order?: readonly number[], end?: string }

const ALL = TI_MS.map((_, i) => i)
const signalOf = (j: number, i: number): number => PHANTOM.signals[j]?.[i] ?? Number.NaN
const timeOf = (i: number): number => TI_MS[i] ?? Number.NaN

export function longRows({ time = plain, conc = plain, signal = plain, x = 'TI (ms)', c = 'conc (mM)', order = ALL }: How = {}): string[][] {
  return [['tube', c, x, 'signal'], ...CONC_MM.flatMap((conc_mM, j) => order.map(i => [j === 0 ? 'blank' : `n${j}`, conc(conc_mM), time(timeOf(i)), signal(signalOf(j, i))]))]
}
export function columnRows({ time = plain, conc = plain, signal = plain, x = 'TI (ms)', c = 'mM', order = ALL }: How = {}): string[][] {
  return [[x, ...CONC_MM.map(conc_mM => `${conc(conc_mM)} ${c}`)], ...order.map(i => [time(timeOf(i)), ...CONC_MM.map((_, j) => signal(signalOf(j, i)))])]
}
export function rowRows({ time = plain, conc = plain, signal = plain, c = 'conc (mM)' }: How = {}): string[][] {
  return [['tube', c, ...TI_MS.map(ti => `${time(ti)} ms`)], ...CONC_MM.map((conc_mM, j) => [j === 0 ? 'blank' : `n${j}`, conc(conc_mM), ...ALL.map(i => signal(signalOf(j, i)))])]
}

const quote = (cell: string, mark: string): string => cell.includes(mark) || /["\n]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell
export const joined = (rows: readonly (readonly string[])[], { mark = ',', end = '\n' }: How = {}): string => rows.map(row => row.map(cell => quote(cell, mark)).join(mark)).join(end) + end
const shape = (name: string, rows: readonly (readonly string[])[], how: How = {}, rest: Partial<Shape> = {}): Shape => ({ name, bytes: utf8(joined(rows, how)), ...rest })

const lines = 'Field: 3 T\nTemperature: 37 °C\npH: 7.4\n\n'
const withRow = (rows: string[][], at: number, ...added: string[][]): string[][] => [...rows.slice(0, at), ...added, ...rows.slice(at)]
const scaled = (factor: number): Number => value => String(Number((value * factor).toPrecision(12)))

export const TEXT_SHAPES: Shape[] = [
  shape('a row per point, commas', longRows()), shape('a column per tube, commas', columnRows()), shape('a row per tube, commas', rowRows()),
  shape('semicolons and decimal commas', longRows({ conc: comma, signal: comma }), { mark: ';' }), shape('tabs and decimal commas', columnRows({ conc: comma, signal: comma }), { mark: '\t' }),
  shape('a row per tube with tabs', rowRows(), { mark: '\t' }), shape('decimal commas in quotation marks between commas', columnRows({ conc: comma, signal: comma })),
  { ...shape('UTF-8 with its mark', longRows()), bytes: utf8(`\uFEFF${joined(longRows())}`), encoding: 'utf-8' },
  { ...shape('UTF-16 LE with its mark', longRows()), bytes: wide(joined(longRows()), true, true), encoding: 'utf-16le' },
  { ...shape('UTF-16 BE with its mark', longRows()), bytes: wide(joined(longRows()), false, true), encoding: 'utf-16be' },
  { ...shape('UTF-16 LE without its mark', longRows()), bytes: wide(joined(longRows()), true, false), encoding: 'utf-16le' },
  { ...shape('UTF-16 BE without its mark', longRows()), bytes: wide(joined(longRows()), false, false), encoding: 'utf-16be' },
  { name: 'Windows code page with µ and °', bytes: western(`Temperature: 25 °C\n${joined(longRows({ c: 'conc (µM)', conc: scaled(1000) }))}`), encoding: 'windows-1252' },
  shape('carriage returns alone', longRows(), { end: '\r' }), shape('carriage returns and line feeds', longRows(), { end: '\r\n' }),
  shape('blank rows before, between and after', withRow(withRow(columnRows(), 4, ['', '', '', '', '', '']), 0, ['', '', '', '', '', ''], ['', '', '', '', '', ''])),
  shape('a blank column on the left', columnRows().map(row => ['', ...row])), shape('a blank column in the middle', columnRows().map(row => [...row.slice(0, 3), '', ...row.slice(3)])),
  shape('marks behind the last cell of every row', longRows().map(row => [...row, '', ''])), { name: 'every cell in quotation marks', bytes: utf8(longRows().map(row => row.map(cell => `"${cell}"`).join(',')).join('\n')) },
  shape('times in s', longRows({ x: 'TI (s)', time: scaled(1e-3) })), shape('times in µs', longRows({ x: 'TI [µs]', time: scaled(1e3) })), shape('times in msec', columnRows({ x: 'TI, msec' })), shape('times in sec.', columnRows({ x: 'Inversion time (sec.)', time: scaled(1e-3) })),
  shape('time after inversion in words', columnRows({ x: 'Inversion time / ms' })), shape('TI_ms', longRows({ x: 'TI_ms' })),
  shape('concentrations in µM', longRows({ c: 'conc (\u00B5M)', conc: scaled(1000) })), shape('concentrations in μM with the Greek letter', longRows({ c: 'conc (\u03BCM)', conc: scaled(1000) })),
  shape('concentrations in uM', longRows({ c: 'c [uM]', conc: scaled(1000) })), shape('concentrations in mmol/L', longRows({ c: 'Concentration (mmol/L)' })), shape('concentrations in mol/m³', longRows({ c: 'Concentration (mol/m³)' })),
  shape('concentrations in mM Gd', longRows({ c: 'conc (mM Gd)' })), shape('concentrations in mmol Gd/L', longRows({ c: 'conc (mmol Gd/L)' })), shape('concentrations in mol/L', longRows({ c: 'conc (mol/L)', conc: scaled(1e-3) })), shape('heads of tubes in µM', columnRows({ c: 'µM', conc: scaled(1000) })),
  shape('a row of units beneath the head', withRow(longRows({ x: 'TI', c: 'conc' }), 1, ['', 'mM', 'ms', 'au'])),
  shape('units in the cells', longRows({ x: 'TI', c: 'conc', time: value => `${value} ms`, conc: value => `${value} mM` })), shape('units in the cells that differ from row to row', longRows({ x: 'TI', time: value => value >= 1000 ? `${value / 1000} s` : `${value} ms` })),
  shape('thousands parted by spaces', columnRows({ signal: grouped(' ') })), shape('thousands parted by no-break spaces', columnRows({ signal: grouped('\u00A0') })), shape('thousands parted by thin spaces', columnRows({ signal: grouped('\u2009') })),
  shape('thousands parted by narrow no-break spaces', columnRows({ signal: grouped('\u202F', ',') }), { mark: ';' }), shape('thousands parted by apostrophes', columnRows({ signal: grouped('\'') })), shape('thousands parted by typographic apostrophes', columnRows({ signal: grouped('\u2019') })),
  shape('thousands parted by commas', columnRows({ signal: grouped(',') })), shape('thousands parted by points', columnRows({ signal: grouped('.', ','), conc: comma }), { mark: ';' }),
  shape('exponents', columnRows({ signal: value => value.toExponential(), x: 'TI (s)', time: value => (value / 1000).toExponential() })), shape('exponents with capital letter and plus', columnRows({ signal: value => value.toExponential().replace('e', 'E') })),
  shape('the minus sign of typesetting', columnRows({ signal: value => String(value).replace('-', '\u2212') })), shape('a plus before positive numbers', columnRows({ signal: value => value > 0 ? `+${value}` : String(value) })),
  shape('times out of order', columnRows({ order: [3, 0, 7, 1, 6, 2, 5, 4] })), shape('points out of order in the long form', longRows({ order: [7, 6, 5, 4, 3, 2, 1, 0] })),
  shape('a row of means beneath', [...columnRows(), ['Mean', ...CONC_MM.map(() => '123.4')]], {}, { asks: ['summaryRow'] }), shape('a row of sums and one of SD beneath', [...columnRows(), ['Total', '1', '2', '3', '4', '5'], ['SD', '1', '2', '3', '4', '5']], {}, { asks: ['summaryRow'] }),
  shape('a remark beneath', [...columnRows(), [], ['Comment: coil moved after the third tube']]), shape('several remarks beneath', [...longRows(), ['Note: second day'], ['* measured twice']]),
  { name: 'lines about the conditions above', bytes: utf8(lines + joined(columnRows())), draft: { conditions: { ...FORM() } }, conditions: { b0_T: 3, pH: 7.4 } },
  { name: 'lines about the conditions behind #', bytes: utf8(`# field = 9.4 T\n# temperature: 25 degC\n${joined(columnRows())}`), draft: { conditions: { ...FORM('pH') } }, conditions: { b0_T: 9.4, temperature_K: 298.15, pH: 7 } },
  { name: 'the field as a frequency', bytes: utf8(`Field,60 MHz\nTemperature,310 K\n${joined(columnRows())}`), draft: { conditions: { ...FORM('pH') } }, conditions: { temperature_K: 310 } },
  shape('a head over two rows', [['tube', 'conc (mM)', 'TI (ms)', ...Array.from({ length: 7 }, () => '')], ['', '', ...TI_MS.map(String)], ...rowRows().slice(1)]),
  shape('names in the head and concentrations in a row', [['TI (ms)', 'blank', 'a', 'b', 'c', 'd'], ['conc (mM)', ...CONC_MM.map(String)], ...columnRows().slice(1)]),
  shape('an SD beside every tube', columnRows().map((row, r) => row.flatMap((cell, j) => j === 0 ? [cell] : [cell, r === 0 ? `${cell} SD` : '4.2']))),
  shape('a region\'s SD and pixels beside each point', longRows().map((row, r) => [...row, ...(r === 0 ? ['ROI SD', 'pixels'] : ['12.5', '64'])])),
  shape('times across the head, concentrations for names', [['TI (ms)', ...TI_MS.map(String)], ...CONC_MM.map((conc, j) => [`${conc} mM`, ...ALL.map(i => String(signalOf(j, i)))])]),
  shape('times with their unit across the head, an empty corner', [['', ...TI_MS.map(ti => `${ti} ms`)], ...CONC_MM.map((conc, j) => [`${conc} mM`, ...ALL.map(i => String(signalOf(j, i)))])]),
  shape('one word over all tubes', [['', 'Signal (a.u.)', '', '', '', ''], ...columnRows()]), shape('one word over all tubes beside the times', [['TI (ms)', 'Signal', '', '', '', ''], ['', ...(columnRows()[0] ?? []).slice(1)], ...columnRows().slice(1)]),
  shape('heads cut short', [['Sample', 'Conc. (mM)', 'Inv. time (ms)', 'Sig. int. (a.u.)'], ...longRows().slice(1)]), shape('heads without a space before the unit', [['Sample', 'Gd conc.[mmol/L]', 'TI[ms]', 'Mean'], ...longRows().slice(1)]),
  shape('numbered rows', columnRows().map((row, r) => [r === 0 ? '#' : String(r), ...row])), { name: 'a first line that names the mark between columns', bytes: utf8(`sep=;\n${joined(columnRows(), { mark: ';' })}`) },
  shape('hidden marks in names', longRows().map(row => row.map(cell => cell === 'n1' ? '\u202En1\u200B' : cell)), {}, { asks: ['hiddenMarks'] }),
  shape('names that begin like formulas', longRows().map(row => row.map(cell => cell === 'n1' ? '=SUM(A1)' : cell === 'n2' ? '@n' : cell === 'n3' ? '+cmd' : cell))),
]

/** The form without what a shape's own lines say. */
function FORM(without?: string): Record<string, string | number> {
  const form = { instrument: 'Scanner 2', temperatureSd_K: 0.2, medium: 'plasma', concBasis: 'icp', concScaleError_frac: 0.015, timing: 'longTr', signalForm: 'signed' }
  return without === 'pH' ? { ...form, pH: 7 } : form
}
