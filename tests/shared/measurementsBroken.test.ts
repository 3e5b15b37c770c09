import { describe, expect, it } from 'vitest'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { readText } from '#shared/measurements/tabular/readText'
import { understandTable } from '#shared/measurements/tabular/understand'
import { UPLOAD_LIMITS } from '#shared/measurements/tabular/limits'
import { blocking, readUpload, RECOVERY_FORM, understandUpload } from './measurementsSupport'

const draft = { conditions: { ...RECOVERY_FORM }, complexCode: 'SK-07', lot: 'B2' }

interface Case { file: string, id: string, row: number | null, column: number | null, says: RegExp, accepted: RegExp, severity?: 'asks' }

const TABLES: Case[] = [
  { file: 'headers-only.csv', id: 'noValues', row: 1, column: null, says: /no rows of values/, accepted: /at least one row of numbers/ },
  { file: 'prose.txt', id: 'noTable', row: null, column: null, says: /No table/, accepted: /commas, semicolons or tabs/ },
  { file: 'text-in-number-cell.csv', id: 'notNumber', row: 5, column: 4, says: /'saturated' is not a number/, accepted: /1234\.5 \(decimal point\).*empty cell/ },
  { file: 'nan.csv', id: 'notFinite', row: 4, column: 3, says: /'NaN' is no finite number/, accepted: /a number such as/ },
  { file: 'nan.csv', id: 'notFinite', row: 6, column: 5, says: /'-inf'/, accepted: /a number such as/ },
  { file: 'negative-time.csv', id: 'outOfDomain', row: 2, column: 1, says: /'-50' is negative/, accepted: /of 0 or more/ },
  { file: 'duplicate-headers.csv', id: 'duplicateHeader', row: 1, column: 5, says: /Columns D and E are both headed '0\.50 mM'/, accepted: /a name of its own/ },
  { file: 'one-tube.csv', id: 'tooFewTubes', row: null, column: null, says: /only one tube/, accepted: /at least 3 tubes/ },
  { file: 'no-blank.csv', id: 'noBlank', row: null, column: null, says: /no blank/, accepted: /in the same medium/, severity: 'asks' },
  { file: 'equal-concentrations.csv', id: 'equalConcentrations', row: null, column: null, says: /same concentration, 0\.5 mM/, accepted: /different concentrations/ },
  { file: 'constant-signal.csv', id: 'constantSignal', row: 1, column: 4, says: /same signal 500 at every TI/, accepted: /signals that change/ },
  { file: 'long-tube-name.csv', id: 'longLabel', row: 1, column: 3, says: /has 1\d\d characters/, accepted: /at most 120 characters/ },
  { file: 'no-unit.csv', id: 'unit', row: 1, column: 1, says: /names no unit/, accepted: /choose s, ms or µs/ },
  { file: 'mixed-decimal.csv', id: 'otherDecimal', row: 3, column: 2, says: /decimal comma/, accepted: /decimal point.*choose the decimal comma/ },
  { file: 'decimal-comma-unquoted.csv', id: 'extraCells', row: 2, column: 5, says: /7 cells, the head only 4/, accepted: /semicolons or tabs/ },
  { file: 'open-quote.csv', id: 'quotes', row: 1, column: null, says: /quotation mark/, accepted: /around a whole cell/ },
  { file: 'extra-cells.csv', id: 'extraCells', row: 7, column: 6, says: /7 cells, the head only 5/, accepted: /as many cells/ },
  { file: 'concentration-varies.csv', id: 'concentrationVaries', row: 41, column: 2, says: /'1' in row 32 and '2' here/, accepted: /one concentration per tube/ },
]

describe('a table that cannot be stored says where, what and what would be accepted [issue 2, bad input]', () => {
  it.each(TABLES)('$file: $id at row $row, column $column', ({ file, id, row, column, says, accepted, severity = 'blocks' }) => {
    const understood = understandUpload(file.includes('/') ? file : `broken/${file}`, relaxT1Ir, draft)
    const problem = understood.problems.find(candidate => candidate.id === id && candidate.row === row && candidate.column === column)
    expect(problem, JSON.stringify(understood.problems, null, 1)).toBeDefined()
    expect(problem).toMatchObject({ severity })
    expect(problem?.message).toMatch(says)
    expect(problem?.accepted).toMatch(accepted)
    expect(understood.canStore).toBe(severity === 'asks')
  })

  it('keeps HTML in a tube name as the text it is', () => {
    const understood = understandUpload('broken/html-in-tube-name.csv', relaxT1Ir, draft)
    expect(blocking(understood)).toEqual([])
    expect(understood.tubes.map(tube => tube.label)).toContain('<script>alert(1)</script> 0.50 mM')
  })
})

describe('bytes that are no text table are refused with the reason [issue 2, bad input]', () => {
  it.each([
    ['empty.csv', 'empty', /0 bytes/], ['blank-space.csv', 'empty', /blank space/], ['picture.png', 'notText', /PNG picture/],
    ['packed.xlsx', 'notText', /spreadsheet workbook/], ['zeros.bin', 'notText', /no text has/],
  ])('%s: %s', (file, id, message) => {
    const { problem } = readUpload(`broken/${file}`)
    expect(problem).toMatchObject({ id, severity: 'blocks' })
    expect(problem?.message).toMatch(message)
    expect(problem?.accepted).toMatch(/text table \(CSV or TSV\)/)
  })

  it('a file over the limit names its size and the limit', () => {
    const read = readText(new Uint8Array(UPLOAD_LIMITS.bytes + 1).fill(48))
    expect(read).toMatchObject({ ok: false, problem: { id: 'tooLarge' } })
    expect(read.ok ? '' : read.problem.message).toContain(`${UPLOAD_LIMITS.bytes + 1} bytes`)
  })

  it('too many rows and too many columns are counted and refused', () => {
    const long = `TI (ms),S\n${'1,2\n'.repeat(UPLOAD_LIMITS.rows + 5)}`
    const wide = `${Array.from({ length: UPLOAD_LIMITS.columns + 1 }, (_, i) => `c${i}`).join(',')}\n${'1,'.repeat(UPLOAD_LIMITS.columns)}1\n`
    expect(understandTable({ text: long, kind: relaxT1Ir }).problems.map(problem => problem.id)).toContain('tooManyRows')
    expect(understandTable({ text: wide, kind: relaxT1Ir }).problems.map(problem => problem.id)).toContain('tooManyColumns')
  })
})

describe('the list of problems', () => {
  it('ends with the number of those it does not name [200 listed]', () => {
    const text = `tube,conc (mM),TI (ms),signal\n${'a,1,50,bad\n'.repeat(700)}`
    const { problems } = understandTable({ text, kind: relaxT1Ir, draft })
    expect(problems).toHaveLength(201)
    expect(problems.at(-1)?.message).toMatch(/^5\d\d more problems/)
  })

  it('says of magnitudes below zero and of TI beyond TR which choice is in doubt', () => {
    const text = 'TI (ms),blank,0.5 mM,1 mM\n50,-9,-7,-5\n100,-8,-5,-2\n500,1,4,6\n2000,7,8,9\n'
    const { problems } = understandTable({ text, kind: relaxT1Ir, draft: { ...draft, conditions: { ...RECOVERY_FORM, signalForm: 'magnitude', timing: 'inversionToInversion', tr_s: 1.5 } } })
    expect(problems.find(problem => problem.id === 'negativeMagnitude')).toMatchObject({ field: 'conditions.signalForm', severity: 'blocks' })
    expect(problems.find(problem => problem.id === 'impossibleTiming')?.accepted).toMatch(/delay after the read-out/)
  })
})
