import { describe, expect, it } from 'vitest'
import { relaxFitted } from '#shared/measurements/relaxFitted'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { readText } from '#shared/measurements/tabular/readText'
import { understandTable } from '#shared/measurements/tabular/understand'
import { blocking, RECOVERY_FORM, uploadBytes, understandUpload } from './measurementsSupport'

const form = { conditions: { ...RECOVERY_FORM } }

describe('inversion-recovery files', () => {
  it('takes conditions from the lines above the table and says from where', () => {
    const understood = understandUpload('good/column-per-tube.csv', relaxT1Ir, { lot: 'B2' })
    expect(understood.conditions).toMatchObject({
      instrument: 'Scanner 2', b0_T: 3, temperature_K: 310.15, temperatureSd_K: 0.2, pH: 7.4, medium: 'plasma', date: '2026-11-12',
      timing: 'inversionToInversion', tr_s: 12, signalForm: 'magnitude', concBasis: 'icp', concScaleError_frac: 0.015,
    })
    expect(understood.found.find(condition => condition.key === 'instrument')?.place).toBe('cell B3')
    expect(understood.found.find(condition => condition.key === 'b0_T')?.place).toBe('row 1')
    expect(blocking(understood)).toEqual([])
    expect(understood.canStore).toBe(true)
    expect(understood.headerRow).toBe(13)
  })

  it('reads agent and concentration out of the names of tubes, and leaves the blank to all agents', () => {
    const { tubes, layout } = understandUpload('good/column-per-tube.csv', relaxT1Ir)
    expect(layout).toBe('columnPerTube')
    expect(tubes.map(({ role, agent, conc_mM, place }) => [role, agent, conc_mM, place])).toEqual([
      ['blank', null, 0, 'column B, rows 14 to 23'], ['sample', 'SK-07', 0.1, 'column C, rows 14 to 23'], ['sample', 'SK-07', 0.25, 'column D, rows 14 to 23'],
      ['sample', 'SK-07', 0.5, 'column E, rows 14 to 23'], ['sample', 'SK-07', 1, 'column F, rows 14 to 23'],
    ])
    expect(tubes[1]?.points.rows[0]?.[0]).toBe(0.05)
    expect(tubes[1]?.pointPlaces[0]).toEqual({ row: 14, column: 3 })
  })

  it('reads the long form with semicolons, decimal commas, Windows line ends and a byte-order mark', () => {
    const understood = understandUpload('good/long-semicolon-comma.csv', relaxT1Ir, form)
    expect(understood).toMatchObject({ delimiter: ';', decimal: 'comma', layout: 'long' })
    expect(blocking(understood)).toEqual([])
    expect(understood.columns.map(column => column.stem)).toEqual([null, 'tube', 'agent', 'batch', 'conc', 'ti', 'signal', 'signalSd'])
    expect(understood.series).toHaveLength(1)
    expect(understood.series[0]).toMatchObject({ complexCode: 'SK-07', lot: 'B2' })
    expect(understood.tubes[4]?.points.columns).toEqual(['ti_s', 'signal_au', 'signalSd_au'])
    expect(understood.tubes[4]?.points.rows[0]).toEqual([0.05, expect.any(Number), 4])
  })

  it('reads a row per tube with times in the head, µM in a Windows code page and the agent in a line above', () => {
    const understood = understandUpload('good/row-per-tube.tsv', relaxT1Ir, form)
    expect(understood).toMatchObject({ delimiter: '\t', layout: 'rowPerTube' })
    expect(blocking(understood)).toEqual([])
    expect(understood.tubes.map(tube => [tube.agent, tube.batch, tube.conc_mM])).toEqual([[null, null, 0], ['SK-07', 'B2', 0.1], ['SK-07', 'B2', 0.25], ['SK-07', 'B2', 0.5], ['SK-07', 'B2', 1]])
    expect(understood.tubes[0]?.points.rows.map(row => row[0])).toEqual([0.05, 0.1, 0.2, 0.4, 0.7, 1, 1.5, 2.5, 4, 8])
  })

  it('copies a shared blank into the series of every agent in the file', () => {
    const { series } = understandUpload('good/two-agents-shared-blank.csv', relaxT1Ir, form)
    expect(series.map(({ complexCode, lot, tubes }) => [complexCode, lot, tubes.map(tube => tube.tubeNo)])).toEqual([['SK-07', 'B2', [1, 2, 3, 4]], ['SK-11', 'A1', [1, 5, 6, 7]]])
    expect(series[0]?.tubes[0]).toEqual(series[1]?.tubes[0])
  })

  it('decodes UTF-16 that has a byte-order mark', () => {
    const read = readText(uploadBytes('good/utf16.csv'))
    expect(read).toMatchObject({ ok: true, encoding: 'utf-16le' })
    expect(understandUpload('good/utf16.csv', relaxT1Ir).tubes.map(tube => tube.conc_mM)).toEqual([0, 0.5, 1])
  })

  it('keeps repeats at one TI as points of their own', () => {
    const { tubes } = understandTable({ text: 'TI (ms),a 0 mM,b 1 mM,c 2 mM\n50,1,2,3\n50,1.1,2.1,3.1\n900,5,6,7\n', kind: relaxT1Ir })
    expect(tubes[0]?.points.rows).toEqual([[0.05, 1], [0.05, 1.1], [0.9, 5]])
  })
})

describe('what the person chose wins over what was found', () => {
  const text = 'time,S1,S2,S3\n1,5,4,3\n2,6,5,4\n3,7,6,5\n4,8,7,6\n'
  it('unit, concentration, role, agent and label of single tubes', () => {
    const draft = {
      columns: [{ index: 0, stem: 'ti', unit: 's' }],
      tubes: [{ key: 'column 1', role: 'blank' as const }, { key: 'column 2', conc_mM: 0.5, complexCode: 'SK-07', lot: 'B1', label: 'half' }, { key: 'column 3', role: 'aside' as const }],
    }
    const { tubes, series, columns } = understandTable({ text, kind: relaxT1Ir, draft })
    expect(columns[0]).toMatchObject({ stem: 'ti', unit: 's', how: 'chosen' })
    expect(tubes.map(tube => [tube.role, tube.label, tube.conc_mM, tube.how.role])).toEqual([['blank', 'S1', 0, 'chosen'], ['sample', 'half', 0.5, 'guessed'], ['aside', 'S3', null, 'chosen']])
    expect(series[0]?.tubes.map(tube => tube.tubeNo)).toEqual([1, 2])
  })

  it('a condition taken back is missing again', () => {
    const understood = understandUpload('good/column-per-tube.csv', relaxT1Ir, { conditions: { b0_T: null, pH: 7.1 } })
    expect(understood.conditions).not.toHaveProperty('b0_T')
    expect(understood.conditions.pH).toBe(7.1)
    expect(understood.problems.map(problem => problem.field)).toContain('conditions.b0_T')
  })

  it('header row, layout, mark and decimal mark', () => {
    const odd = 'a|b\nx;y;z\n1;2,5;3\n2;3,5;4\n'
    const draft = { delimiter: ';' as const, decimal: 'comma' as const, headerRow: null, layout: 'columnPerTube' as const, columns: [{ index: 0, stem: 'ti', unit: 's' }] }
    const understood = understandTable({ text: odd, kind: relaxT1Ir, draft })
    expect(understood.headerRow).toBeNull()
    expect(understood.tubes.map(tube => tube.points.rows)).toEqual([[[1, 2.5], [2, 3.5]], [[1, 3], [2, 4]]])
    expect(understood.how).toEqual({ delimiter: 'chosen', decimal: 'chosen', headerRow: 'chosen', layout: 'chosen' })
  })

  it('a head over two rows is one head', () => {
    const rows = 'tube,conc (mM),TI (ms),,,\n,,50,100,500,1000\na,0,-900,-880,-300,10\nb,0.5,-800,-500,100,500\nc,1,-700,-100,600,900\n'
    const { layout, tubes, problems } = understandTable({ text: rows, kind: relaxT1Ir, draft: { ...form, complexCode: 'SK-07', lot: 'B1' } })
    expect(layout).toBe('rowPerTube')
    expect(tubes[1]).toMatchObject({ label: 'b', conc_mM: 0.5, points: { rows: [[0.05, -800], [0.1, -500], [0.5, 100], [1, 500]] } })
    expect(problems).toEqual([])
  })

  it('a concentration that is still open is the only thing said of its series', () => {
    const { problems } = understandTable({ text: 'TI (ms),1,2,3\n50,-9,-8,-7\n500,1,2,3\n900,4,5,6\n5000,8,8,9\n', kind: relaxT1Ir, draft: { ...form, complexCode: 'SK-07', lot: 'B1' } })
    expect(problems.map(problem => `${problem.id} ${problem.row} ${problem.column}`)).toEqual(['noConcentration 1 2', 'noConcentration 1 3', 'noConcentration 1 4'])
  })

  it('a bare time across the head takes its unit from the choice', () => {
    const rows = 'tube,conc (mM),50,100,500\na,0,1,2,3\nb,1,2,3,4\nc,2,3,4,5\n'
    expect(understandTable({ text: rows, kind: relaxT1Ir }).looseUnits).toMatchObject([{ stem: 'ti', unit: null, place: 'row 1' }])
    const chosen = understandTable({ text: rows, kind: relaxT1Ir, draft: { units: { ti: 'ms' } } })
    expect(chosen.tubes[0]?.points.rows).toEqual([[0.05, 1], [0.1, 2], [0.5, 3]])
  })
})

describe('tables of fitted values', () => {
  it('reads T1 with its error, and which quantity was measured, from the heads', () => {
    const understood = understandUpload('good/fitted-t1.csv', relaxFitted, { conditions: { ...RECOVERY_FORM, timing: null, signalForm: null } })
    expect(understood.conditions.quantity).toBe('T1')
    expect(understood.tubes[1]?.points.columns).toEqual(['t_s', 'tSe_s'])
    expect(blocking(understood)).toEqual([])
  })

  it('is not misled by tubes that are called t1 and t2', () => {
    const text = 'tube,t1,t2,t3\nconc (mM),0,0.5,1\nT1 (ms),1800,380,210\n'
    const { layout, tubes } = understandTable({ text, kind: relaxFitted })
    expect(layout).toBe('columnPerTube')
    expect(tubes.map(tube => [tube.label, tube.conc_mM, tube.points.rows])).toEqual([['t1', 0, [[1.8]]], ['t2', 0.5, [[0.38]]], ['t3', 1, [[0.21]]]])
  })

  it('reads R2 with a column per tube', () => {
    const understood = understandUpload('good/fitted-r2-column-per-tube.tsv', relaxFitted, { complexCode: 'SK-07', lot: 'B2' })
    expect(understood).toMatchObject({ layout: 'columnPerTube', conditions: { quantity: 'T2' } })
    expect(understood.tubes.map(tube => [tube.label, tube.role, tube.conc_mM])).toEqual([['v1', 'blank', 0], ['v2', 'sample', 0.1], ['v3', 'sample', 0.25], ['v4', 'sample', 0.5], ['v5', 'sample', 1]])
    expect(understood.tubes[4]?.points.columns).toEqual(['rate_per_s', 'rateSe_per_s'])
  })
})
