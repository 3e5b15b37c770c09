import { afterAll, describe, expect, it } from 'vitest'
import { confirmUpload } from '../../server/services/confirmUpload'
import { previewUpload } from '../../server/services/previewUpload'
import { saveTubeSheet, tubeSheetFile } from '../../server/services/tubeSheets'
import type { SaveTubeSheet } from '../../shared/schemas/tubeSheet'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { workbook, type HandCell } from '../support/workbookFiles'
import { PHANTOM, utf8 } from '../support/tableShapes'
import { makeAgent, stage } from '../support/uploads'

const deps = makeDeps()
afterAll(() => deps.close())

const CONDITIONS = { instrument: 'Scanner 2', b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'water', timing: 'longTr', signalForm: 'signed', concBasis: 'icp', concScaleError_frac: 0.01 }
const SHEET: SaveTubeSheet = {
  kind: 'relax.t1.ir', title: 'Second day', conditions: CONDITIONS, values: PHANTOM.ti_ms.map(ti => ti / 1000), columns: 5,
  tubes: PHANTOM.conc_mM.map((conc_mM, i) => ({
    tubeNo: i + 1, label: i === 0 ? 'B' : `K${i}`, role: i === 0 ? 'blank' as const : 'sample' as const, agent: i === 0 ? null : 'SK-07', lot: i === 0 ? null : 'B2', conc_mM,
    concSe_mM: i === 0 ? null : 0.01 * conc_mM, stock_uL: null, diluent_uL: null,
  })),
}
const signals = PHANTOM.ti_ms.map((ti, i) => [ti, ...PHANTOM.signals.map(tube => tube[i] ?? 0)])

async function ready(): Promise<{ programme: TestProgramme, code: string }> {
  const programme = await makeProgramme(deps)
  await makeAgent(deps, programme, { lot: 'B2' })
  return { programme, ...await saveTubeSheet(deps, { actor: programme.people.chemist, programmeId: programme.id, sheet: SHEET }) }
}

async function preview(programme: TestProgramme, content: string | Uint8Array, draft = {}) {
  const id = await stage(deps, programme, content, { fileName: 'table' })
  const key = { actor: programme.people.chemist, programmeId: programme.id, id, draft: { kind: 'relax.t1.ir', ...draft } }
  return { ...await previewUpload(deps, key), confirm: () => confirmUpload(deps, key) }
}

const filled = PHANTOM.conc_mM.map((conc_mM, i) => ({ role: i === 0 ? 'blank' : 'sample', agent: i === 0 ? null : 'SK-07', batch: i === 0 ? null : 'B2', conc_mM, concSe_mM: i === 0 ? null : 0.01 * conc_mM }))

describe('a file that names its tube sheet', () => {
  it.each([['tubes by name', SHEET.tubes.map(tube => tube.label)], ['tubes by number', ['1', '2', '3', '4', '5']], ['tubes as numbered words', ['Tube 1', 'tube 2', 'TUBE 03', 'T4', 'vial 5']]])('takes from it what it does not say itself: %s', async (_, heads) => {
    const { programme, code } = await ready()
    const text = [`Tube sheet: ${code}`, `TI (ms),${heads.join(',')}`, ...signals.map(row => row.join(','))].join('\n')
    const { tubes, tubeSheet, conditions, canStore, problems, confirm } = await preview(programme, text)
    expect(tubeSheet).toBe(code)
    expect(tubes, JSON.stringify(problems)).toMatchObject(filled)
    expect(conditions).toMatchObject(CONDITIONS)
    expect(canStore, JSON.stringify(problems)).toBe(true)
    expect((await confirm()).series).toMatchObject([{ agentCode: 'SK-07', lot: 'B2' }])
  })

  it('says more than the sheet where it says anything, and a person more than both', async () => {
    const { programme, code } = await ready()
    const text = [`Tube sheet: ${code}`, 'Temperature: 25 °C', 'TI (ms),B,K1,K2,K3,K4', 'conc (mM),0,0.3,0.5,1,2', ...signals.map(row => row.join(','))].join('\n')
    const first = await preview(programme, text)
    expect(first.conditions).toMatchObject({ temperature_K: 298.15, pH: 7.4 })
    // The sheet's error belongs to the sheet's concentration, which the file replaces in one tube.
    expect(first.tubes.map(tube => [tube.conc_mM, tube.concSe_mM])).toEqual([[0, null], [0.3, null], [0.5, 0.005], [1, 0.01], [2, 0.02]])
    const second = await preview(programme, text, { conditions: { temperature_K: 300 }, tubes: [{ key: 'column 1', conc_mM: 0, role: 'blank' }, { key: 'column 2', conc_mM: 0.4 }] })
    expect(second.conditions).toMatchObject({ temperature_K: 300 })
    expect(second.tubes[1]).toMatchObject({ conc_mM: 0.4, agent: 'SK-07' })
  })

  it('is found on another sheet of a workbook, and a chosen code wins over it', async () => {
    const { programme, code } = await ready()
    const table: HandCell[][] = [['TI (ms)', 'B', 'K1', 'K2', 'K3', 'K4'], ...signals]
    const bytes = workbook([{ name: 'Signals', rows: table }, { name: 'About', rows: [['Tube sheet', 'TS-ZZZZZ2'], ['pH', 7.4]] }])
    const unknown = await preview(programme, bytes)
    expect(unknown.problems.find(problem => problem.id === 'unknownTubeSheet')).toMatchObject({ field: 'tubeSheet', severity: 'asks', message: expect.stringContaining('TS-ZZZZZ2') })
    expect(unknown.canStore).toBe(false)
    expect((await preview(programme, bytes, { tubeSheet: code })).tubes).toMatchObject(filled)
    expect((await preview(programme, bytes, { tubeSheet: null })).problems.map(problem => problem.id)).not.toContain('unknownTubeSheet')
  })

  it('names tubes that the sheet lacks and tubes that are not in the file', async () => {
    const { programme, code } = await ready()
    const text = [`Tube sheet: ${code}`, 'TI (ms),B,K1,K2,odd', ...signals.map(row => row.slice(0, 5).join(','))].join('\n')
    const { problems } = await preview(programme, text)
    expect(problems.find(problem => problem.id === 'notOnTubeSheet')?.message).toContain('\'odd\'')
    expect(problems.find(problem => problem.id === 'missingFromFile')?.message).toContain('\'K3\', \'K4\'')
  })

  it('is another programme\'s as if it were not there', async () => {
    const { code } = await ready()
    const other = await ready()
    const { problems } = await preview(other.programme, [`Tube sheet: ${code}`, 'TI (ms),B,K1,K2,K3,K4', ...signals.map(row => row.join(','))].join('\n'))
    expect(problems.map(problem => problem.id)).toContain('unknownTubeSheet')
  })
})

describe('the sheet as a file', () => {
  it('comes back filled in, with agents, batches, concentrations and conditions', async () => {
    const { programme, code } = await ready()
    const { bytes } = await tubeSheetFile(deps, { programmeId: programme.id, code, form: 'csv' })
    const times = new Map(signals.map(([ti, ...rest]) => [String(ti), rest]))
    const text = new TextDecoder().decode(bytes).split('\r\n').map((line) => { const ti = line.split(',')[0] ?? ''; const row = times.get(ti); return row && line.includes(',,') ? [ti, ...row].join(',') : line }).join('\r\n')
    const { tubes, canStore, problems, conditions } = await preview(programme, utf8(text))
    expect(tubes, JSON.stringify(problems)).toMatchObject(filled)
    expect(conditions).toMatchObject(CONDITIONS)
    expect(canStore, JSON.stringify(problems)).toBe(true)
  })

  it('that comes back empty says that it has no points', async () => {
    const { programme, code } = await ready()
    const { bytes } = await tubeSheetFile(deps, { programmeId: programme.id, code, form: 'xlsx' })
    const { canStore, problems, tubeSheet } = await preview(programme, bytes)
    expect(tubeSheet).toBe(code)
    expect(canStore).toBe(false)
    expect(problems.filter(problem => problem.severity === 'blocks').length).toBeGreaterThan(0)
  })
})
