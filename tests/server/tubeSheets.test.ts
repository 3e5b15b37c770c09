import { afterAll, describe, expect, it } from 'vitest'
import readXlsxFile from 'read-excel-file/node'
import { previewUpload } from '../../server/services/previewUpload'
import { proposeAcquisition, saveTubeSheet, showTubeSheet, showTubeSheets, tubeSheetFile } from '../../server/services/tubeSheets'
import { SHEET_CODE, type SaveTubeSheet } from '../../shared/schemas/tubeSheet'
import { refusal } from '../support/actors'
import { makeDeps, makeProgramme } from '../support/factory'
import { makeAgent, runJobs, stage, upload } from '../support/uploads'

const deps = makeDeps()
afterAll(() => deps.close())

const TIMES_S = [0.03, 0.06, 0.12, 0.25, 0.5, 1, 2, 4]
const CONCS = [0, 0.25, 0.5, 1, 2]
const SHEET: SaveTubeSheet = {
  kind: 'relax.t1.ir', title: 'SK-07 L1 at 3 T', values: TIMES_S, columns: 3,
  conditions: { instrument: 'Bay 3', b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'plasma', timing: 'longTr', signalForm: 'signed', concBasis: 'icp', concScaleError_frac: 0.02 },
  tubes: CONCS.map((conc_mM, i) => ({ tubeNo: i + 1, label: conc_mM === 0 ? 'blank' : `vial ${i}`, role: conc_mM === 0 ? 'blank' : 'sample', agent: conc_mM === 0 ? null : 'SK-07', lot: conc_mM === 0 ? null : 'L1', conc_mM, concSe_mM: conc_mM === 0 ? null : 0.01 * conc_mM, stock_uL: null, diluent_uL: null })),
}
const signalOf = (i: number, t: number): number => Number((1000 - 1940 * Math.exp(-t * (0.5 + 4.2 * CONCS[i]!)) + 2 * Math.sin(7 * i + 50 * t)).toFixed(2))

async function made() {
  const programme = await makeProgramme(deps)
  await makeAgent(deps, programme)
  const { code } = await saveTubeSheet(deps, { actor: programme.people.chemist, programmeId: programme.id, sheet: SHEET })
  return { programme, code }
}

describe('tube sheets', () => {
  it('are kept under a readable code of their own, listed and shown in the units of the trade', async () => {
    const { programme, code } = await made()
    const second = await saveTubeSheet(deps, { actor: programme.people.chemist, programmeId: programme.id, sheet: SHEET })
    expect(code).toMatch(SHEET_CODE)
    expect(second.code).not.toBe(code)
    const { sheets } = await showTubeSheets(deps, { programmeId: programme.id })
    expect(sheets.map(one => one.code)).toEqual([second.code, code])
    const shown = await showTubeSheet(deps, { programmeId: programme.id, code })
    expect(shown).toMatchObject({ kindTitle: 'T1, inversion recovery', x: { label: 'TI', unit: 'ms', shown: [30, 60, 120, 250, 500, 1000, 2000, 4000] }, createdBy: programme.people.chemist.name })
    expect(shown.shownConditions).toContainEqual({ label: 'Temperature', shown: '37\u00A0°C' })
  })

  it('refuse two tubes of one name and a measurement that is not there; another programme does not see them', async () => {
    const { programme, code } = await made()
    const save = (sheet: SaveTubeSheet) => refusal(saveTubeSheet(deps, { actor: programme.people.chemist, programmeId: programme.id, sheet }))
    expect(await save({ ...SHEET, tubes: [SHEET.tubes[0]!, { ...SHEET.tubes[1]!, label: 'BLANK' }] })).toMatchObject({ code: 'invalidInput', message: expect.stringContaining('BLANK') })
    expect(await save({ ...SHEET, kind: 'relax.magic' })).toMatchObject({ code: 'invalidInput' })
    const other = await makeProgramme(deps)
    expect(await refusal(showTubeSheet(deps, { programmeId: other.id, code }))).toMatchObject({ code: 'notFound' })
  })

  it('come back filled in: agents, batches, concentrations, errors and conditions are those of the sheet [round trip, CSV]', async () => {
    const { programme, code } = await made()
    const { bytes, fileName } = await tubeSheetFile(deps, { programmeId: programme.id, code, form: 'csv' })
    expect(fileName).toContain(code)
    const lines = Buffer.from(bytes).toString('utf8').split('\r\n')
    const head = lines.findIndex(line => line.startsWith('TI (ms)'))
    const filled = lines.map((line, k) => k <= head || k > head + TIMES_S.length ? line : [line.split(',')[0], ...CONCS.map((_, i) => signalOf(i, TIMES_S[k - head - 1]!))].join(','))
    const stored = await upload(deps, programme, { content: filled.join('\r\n'), draft: { kind: 'relax.t1.ir' } })
    expect(stored.series).toMatchObject([{ agentCode: 'SK-07', lot: 'L1' }])
    await runJobs(deps, programme)
  })

  it('fill in a file that holds nothing but names and signals', async () => {
    const { programme, code } = await made()
    const text = [`Tube sheet: ${code}`, '', ['TI (ms)', ...SHEET.tubes.map(tube => tube.label)].join(','), ...TIMES_S.map(t => [1000 * t, ...CONCS.map((_, i) => signalOf(i, t))].join(','))].join('\n')
    const id = await stage(deps, programme, text)
    const preview = await previewUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: { kind: 'relax.t1.ir' } })
    expect(preview.problems.filter(problem => problem.severity === 'blocks')).toEqual([])
    expect(preview.tubes.map(tube => [tube.agent, tube.batch, tube.conc_mM, tube.concSe_mM])).toEqual(CONCS.map(conc => conc === 0 ? [null, null, 0, null] : ['SK-07', 'L1', conc, 0.01 * conc]))
    expect(preview.conditions).toMatchObject({ instrument: 'Bay 3', concScaleError_frac: 0.02, temperature_K: 310.15 })
  })

  it('are workbooks as well, with the same cells', async () => {
    const { programme, code } = await made()
    const { bytes } = await tubeSheetFile(deps, { programmeId: programme.id, code, form: 'xlsx' })
    const [sheet] = await readXlsxFile(Buffer.from(bytes))
    expect(sheet!.sheet).toBe('Signals')
    expect(sheet!.data[0]).toEqual(expect.arrayContaining(['Tube sheet', code]))
    expect(sheet!.data.find(row => row[0] === 'conc (mM)')!.slice(1)).toEqual(CONCS)
  })
})

describe('a proposed acquisition', () => {
  it('reaches from before the shortest time to beyond the longest, for every kind that proposes one', async () => {
    const times = { shortest_s: 0.1, longest_s: 2 }
    const recovery = (await proposeAcquisition(deps, { kind: 'relax.t1.ir', ...times }))!
    expect([recovery.values[0], recovery.values.at(-1)]).toEqual([0.02, 10])
    const echoes = (await proposeAcquisition(deps, { kind: 'relax.t2.echo', shortest_s: 0.03, longest_s: 0.2 }))!
    expect(echoes.values[0]!).toBeLessThanOrEqual(0.0075)
    expect(echoes.values.at(-1)!).toBeGreaterThanOrEqual(0.4)
    expect(echoes.values.length).toBeLessThanOrEqual(64)
    expect(await proposeAcquisition(deps, { kind: 'relax.t1.vfa', ...times })).toBeNull()
    const angles = (await proposeAcquisition(deps, { kind: 'relax.t1.vfa', ...times, tr_s: 0.012 }))!
    expect(angles.unit).toBe('°')
    expect(angles.values.every((angle, i) => angle > (angles.values[i - 1] ?? 0) && angle <= Math.PI / 2)).toBe(true)
  })
})
