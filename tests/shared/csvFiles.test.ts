import { describe, expect, it } from 'vitest'
import { figureCsv } from '#shared/figure/figureCsv'
import { csvCell, csvText } from '#shared/files/csv'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { readTable } from '#shared/measurements/tabular/readTable'
import { longRows, PHANTOM, utf8 } from '../support/tableShapes'

describe('a CSV file that we write', () => {
  it.each(['=1+1', '=cmd|\'/C calc\'!A0', '+cmd', '-cmd', '@SUM(1)', '\t=1', '\r=1'])('holds %j as a text and not as a formula', (text) => {
    expect(csvCell(text).replace(/^"/, '').startsWith('\'')).toBe(true)
  })

  it.each(['-5', '+3', '-1.5e-3', 'SK-07', '5 - 3', ''])('leaves %j as it is', (text) => {
    expect(csvCell(text)).toBe(text)
  })

  it('is read back by the upload with the names that it was written from', async () => {
    const names = ['=1+1', '@SUM(1)', '+cmd', '-cmd', 'two, "quoted"']
    const rows = longRows().map((row, r) => r === 0 ? row : [names[Math.floor((r - 1) / PHANTOM.ti_ms.length)] ?? '', ...row.slice(1)])
    const { tubes } = await readTable(utf8(csvText(rows)), { kind: relaxT1Ir, draft: {} })
    expect(tubes.map(tube => tube.label)).toEqual(names)
    expect(tubes.map(tube => tube.conc_mM)).toEqual(PHANTOM.conc_mM)
  })
})

describe('the numbers of a figure as a file', () => {
  const axis = { x: { label: 'c', unit: 'mM', scale: 'linear' as const }, y: { label: 'R_1', unit: 's^-1', scale: 'linear' as const } }
  it('have units in their heads, a row for each point, and what is said beneath behind #', () => {
    const text = figureCsv({ id: 'slope', title: 'Slope', text: '', ...axis, layers: [{ type: 'points', name: '=tube', token: 't1', points: [{ x: 0, y: 0.4 }, { x: 1, y: 4.6 }] }, { type: 'rule', name: 'blank', axis: 'y', at: 0.4 }] }, ['Screening research only.'])
    expect(text.split('\r\n')).toEqual(['Series,c (mM),R1 (s^−1)', '\'=tube,0,0.4', '\'=tube,1,4.6', '# Screening research only.', ''])
  })
  it('are those of the table that a figure brings, empty where there is no number', () => {
    const table = { columns: [{ key: 'a', label: 'pH', unit: null, numeric: true }, { key: 'b', label: 'GdL', unit: '%', numeric: true }], rows: [{ a: 7.4, b: null }] }
    expect(figureCsv({ id: 'f', title: 'f', text: '', ...axis, layers: [], table }, [])).toBe('pH,GdL (%)\r\n7.4,\r\n')
  })
})
