import { describe, expect, it } from 'vitest'
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
