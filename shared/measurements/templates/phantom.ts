const TUBES = ['0', '0.10', '0.25', '0.50', '1.00']

export interface PhantomTemplate {
  /** Lines above the table. */
  lines: readonly string[]
  /** Head of the abscissa with its unit, and its values. */
  x: string
  values: readonly number[]
  /** Further heads of the long form, filled in for each point. */
  more?: readonly string[]
  /** Rows that say something of each tube, in the form with a column per tube. */
  rows?: readonly string[]
  name: string
}

const SAMPLE_LINES = ['Instrument: Scanner 1', 'Field: 3 T', 'Temperature: 37.0 ± 0.2 °C', 'pH: 7.4', 'Medium: plasma', 'Concentration basis: ICP', 'Stock error: 1.5 %', 'Date: 2026-11-30']
const agentOf = (j: number, word: string): string => j === 0 ? '' : word

/** Files to fill in, with a column per tube and with a row per point: the lines above the table are read as conditions and may be left out. */
export function phantomTemplates({ lines, x, values, more = [], rows = [], name }: PhantomTemplate): { fileName: string, text: string }[] {
  const above = [...SAMPLE_LINES, ...lines, '']
  const wide = [
    [x, 'blank', ...TUBES.slice(1).map(conc => `AGENT ${conc} mM`)].join(','), ...rows.map(row => [row, ...TUBES.map(() => '')].join(',')), ...values.map(value => [value, ...TUBES.map(() => '')].join(',')),
  ]
  const long = [
    ['tube', 'agent', 'batch', 'conc (mM)', 'conc error (mM)', x, 'signal', 'SD', ...more].join(','),
    ...TUBES.flatMap((conc, j) => values.map(value => [`t${j + 1}`, agentOf(j, 'AGENT'), agentOf(j, 'BATCH'), conc, '', value, '', '', ...more.map(() => '')].join(','))),
  ]
  const file = (form: string, table: string[]) => ({ fileName: `${name}-${form}.csv`, text: [...above, ...table].join('\r\n') + '\r\n' })
  return [file('column-per-tube', wide), file('long', long)]
}
