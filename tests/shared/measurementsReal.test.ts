import { describe, expect, it } from 'vitest'
import writeXlsxFile from 'write-excel-file/node'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { readTable } from '#shared/measurements/tabular/readTable'
import { RECOVERY_FORM } from './measurementsSupport'
import { columnRows, joined, longRows, PHANTOM, TEXT_SHAPES, utf8, type Shape } from '../support/tableShapes'
import { SHEET_SHAPES } from '../support/sheetShapes'

const draft = { conditions: { ...RECOVERY_FORM }, complexCode: 'SK-07', lot: 'B2' }
const read = (shape: Shape) => readTable(shape.bytes, { kind: relaxT1Ir, draft: { ...draft, ...shape.draft } })

/** Every shape holds the same phantom, so that the numbers are known whatever the file looks like. */
async function expectPhantom(shape: Shape): Promise<void> {
  const understood = await read(shape)
  const shown = JSON.stringify(understood.problems, null, 1)
  expect(understood.tubes.filter(tube => tube.role !== 'aside').map(tube => tube.conc_mM), shown).toEqual(PHANTOM.conc_mM)
  understood.tubes.forEach((tube, j) => {
    const [x, y] = [tube.points.columns.indexOf('ti_s'), tube.points.columns.indexOf('signal_au')]
    const points = tube.points.rows.map(row => [row[x] ?? Number.NaN, row[y] ?? Number.NaN] as const).sort((a, b) => a[0] - b[0])
    const expected = PHANTOM.ti_ms.map((ti, i) => [ti / 1000, PHANTOM.signals[j]?.[i] ?? Number.NaN] as const)
    expect(points.map(point => point[1]), shape.name).toEqual(expected.map(point => point[1]))
    // Conversion of a unit may leave the last bit of the double behind.
    points.forEach((point, i) => expect(point[0]).toBeCloseTo(expected[i]?.[0] ?? Number.NaN, 12))
  })
  expect(understood.problems.filter(problem => problem.severity === 'blocks'), shown).toEqual([])
  expect(understood.canStore).toBe(true)
  for (const [key, value] of Object.entries(shape.conditions ?? {})) expect(understood.conditions[key], `${shape.name}: ${key}`).toEqual(value)
  for (const id of shape.asks ?? []) expect(understood.problems.map(problem => problem.id), shown).toContain(id)
  if (shape.encoding) expect(understood.encoding).toBe(shape.encoding)
}

describe('one phantom in every shape in which tables come gives the same tubes and points', () => {
  it.each(TEXT_SHAPES)('as text: $name', expectPhantom)
  it.each(SHEET_SHAPES)('as a workbook: $name', expectPhantom)

  it.each([['a row per point', longRows()], ['a column per tube', columnRows()]])('as a workbook that another library wrote: %s', async (name, rows) => {
    const cells = rows.map(row => row.map(cell => cell === '' ? null : /^-?[\d.]+$/.test(cell) ? { value: Number(cell), type: Number } : { value: cell, type: String }))
    await expectPhantom({ name, bytes: new Uint8Array(await writeXlsxFile(cells, { sheet: 'Signals' }).toBuffer()) })
  })

  it('in at least sixty shapes', () => {
    expect(TEXT_SHAPES.length + SHEET_SHAPES.length).toBeGreaterThanOrEqual(60)
  })
})

describe('what two readings could mean is asked and not guessed away', () => {
  it('a lone comma before three digits in a file with points', async () => {
    const understood = await read({ name: '', bytes: utf8('TI (ms);blank;0.5 mM;1 mM\n50;1,234;1.5;2.5\n100;2.5;3.5;4.5\n500;3.5;4.5;5.5\n900;3.5;4.5;5.5\n') })
    expect(understood.problems.find(problem => problem.row === 2 && problem.column === 2)).toMatchObject({ id: 'otherDecimal', severity: 'blocks' })
  })

  it('commas before three digits everywhere', async () => {
    const understood = await read({ name: '', bytes: utf8('TI (ms);blank;0.5 mM;1 mM\n50;1,234;1,500;2,500\n100;2,500;3,500;4,500\n500;3,500;4,500;5,500\n900;3,500;4,500;5,500\n') })
    expect(understood.problems.map(problem => problem.id)).toContain('decimalDoubt')
  })
})

describe('what a file says twice', () => {
  const twice = `Field: 3 T\nField: 9.4 T\nTemperature: 37 °C\nTemperature: 310.15 K\n${joined(longRows())}`
  const form = Object.fromEntries(Object.entries(RECOVERY_FORM).filter(([key]) => key !== 'b0_T' && key !== 'temperature_K'))

  it('is asked about where it differs, and a typed value ends the doubt', async () => {
    const read = (conditions: Record<string, string | number>) => readTable(utf8(twice), { kind: relaxT1Ir, draft: { ...draft, conditions } })
    const { problems, conditions } = await read(form)
    expect(problems.filter(problem => problem.id === 'contradiction')).toMatchObject([{ field: 'conditions.b0_T', severity: 'asks', message: expect.stringContaining('row 1 says \'3 T\', row 2 says \'9.4 T\'') }])
    expect(conditions.b0_T).toBe(3)
    expect((await read({ ...form, b0_T: 7 })).problems.map(problem => problem.id)).not.toContain('contradiction')
  })

  it('a tube called mean stays a tube where it has points of its own', async () => {
    const rows = longRows().map(row => row.map(cell => cell === 'n4' ? 'Mean' : cell))
    const { tubes } = await read({ name: '', bytes: utf8(joined(rows)) })
    expect(tubes.map(tube => tube.label)).toEqual(['blank', 'n1', 'n2', 'n3', 'Mean'])
  })
})

describe('the place of a problem in a workbook', () => {
  it('is the sheet, the row and the column, and the number that follows it in the form', async () => {
    const shape = SHEET_SHAPES.find(candidate => candidate.name === 'conditions on a sheet of their own')
    const understood = await readTable(shape!.bytes, { kind: relaxT1Ir, draft: { ...draft, columns: [{ index: 2, stem: null, unit: null }] } })
    expect(understood.workbook).toEqual({ sheet: 'Signals', sheets: ['Signals', 'Conditions'] })
    expect(understood.problems.filter(problem => problem.row !== null).every(problem => problem.sheet === 'Signals')).toBe(true)
    expect(understood.found.find(found => found.key === 'b0_T')?.place).toBe('sheet Conditions, cell B1')
  })
})
