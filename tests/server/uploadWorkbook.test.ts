import { afterAll, describe, expect, it } from 'vitest'
import { toBinary } from '../../server/platform/ids'
import { type TableJob, threadReader } from '../../server/platform/tableReader'
import { confirmUpload } from '../../server/services/confirmUpload'
import { previewUpload } from '../../server/services/previewUpload'
import { showSeries } from '../../server/services/showSeries'
import { plainName, stageUpload } from '../../server/services/stageUpload'
import { AppError } from '../../shared/errors'
import { measurement, MEASUREMENTS } from '../../shared/measurements/index'
import { readTable } from '../../shared/measurements/tabular/readTable'
import { PreviewDto } from '../../shared/schemas/upload'
import { BROKEN, mutants } from '../support/brokenUploads'
import { refusal } from '../support/actors'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { SHEET_SHAPES } from '../support/sheetShapes'
import { joined, longRows, PHANTOM, utf8 } from '../support/tableShapes'
import { bytesOf, glowTable, makeAgent, stage } from '../support/uploads'

const deps = makeDeps()
afterAll(() => deps.close())

const FORM = { instrument: 'Scanner 2', b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'water', timing: 'longTr', signalForm: 'signed', concBasis: 'icp', concScaleError_frac: 0.01 }
const draft = { kind: 'relax.t1.ir', conditions: FORM, complexCode: 'SK-07', lot: 'B2' }
const shapeOf = (name: string): Uint8Array => {
  const shape = SHEET_SHAPES.find(candidate => candidate.name === name)
  if (!shape) throw new Error(`There is no shape ${name}.`)
  return shape.bytes
}

async function storedRows(programme: TestProgramme): Promise<number> {
  let sum = 0
  for (const table of ['upload', 'series', 'tube', 'fit']) {
    const row = await deps.db(table).where({ programme_id: toBinary(programme.id) }).count({ n: '*' }).first() as { n: number }
    sum += Number(row.n)
  }
  return sum
}

describe('a workbook', () => {
  it('goes from its cells to stored points; what is stored is what the preview showed', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme, { lot: 'B2' })
    const actor = programme.people.chemist
    const id = await stage(deps, programme, shapeOf('conditions on a sheet of their own'), { fileName: 'phantom.xlsx' })
    const preview = PreviewDto.parse(await previewUpload(deps, { actor, programmeId: programme.id, id, draft }))
    expect(preview).toMatchObject({ workbook: { sheet: 'Signals', sheets: ['Signals', 'Conditions'] }, encoding: null, delimiter: null, canStore: true })
    expect(preview.found.map(found => found.place)).toContain('sheet Conditions, cell B1')
    const { series } = await confirmUpload(deps, { actor, programmeId: programme.id, id, draft })
    const { tubes } = await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId: series[0]!.id })
    expect(tubes.map(tube => tube.conc_mM)).toEqual(PHANTOM.conc_mM)
    const points = await deps.db('tube').where({ series_id: toBinary(series[0]!.id) }).orderBy('tube_no').select('points') as { points: string }[]
    const table = (typeof points[1]!.points === 'string' ? JSON.parse(points[1]!.points) : points[1]!.points) as { columns: string[], rows: number[][] }
    expect(table.rows.map(row => row[table.columns.indexOf('signal_au')])).toEqual(PHANTOM.signals[1])
  })

  it('offers its sheets, and a sheet that is not there is named with those that are', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme, { lot: 'B2' })
    const id = await stage(deps, programme, shapeOf('two tables, the larger one read'))
    const key = { actor: programme.people.chemist, programmeId: programme.id, id }
    expect((await previewUpload(deps, { ...key, draft: { ...draft, sheet: 'Second' } })).tubes).toHaveLength(2)
    const { problems, canStore } = await previewUpload(deps, { ...key, draft: { ...draft, sheet: 'Third' } })
    expect(canStore).toBe(false)
    expect(problems.find(problem => problem.id === 'noSheet')).toMatchObject({ field: 'sheet', accepted: expect.stringContaining('\'Second\'') })
  })

  it('is read in the thread as it is read here [same bytes, same reading]', async () => {
    const kind = MEASUREMENTS['relax.t1.ir']!
    for (const shape of SHEET_SHAPES.filter((_, index) => index % 7 === 0)) {
      const here = await readTable(shape.bytes, { kind, draft })
      expect(await threadReader().read({ bytes: shape.bytes, kind: kind.kind, draft, sheet: null })).toEqual(structuredClone(here))
    }
  })
})

describe('the thread that reads', () => {
  const bytes = bytesOf(glowTable())
  const job = { bytes, kind: 'relax.t1.ir', draft: {}, sheet: null }

  it('is stopped when its time is over, and says so of the file', async () => {
    const { problems, canStore } = await threadReader({ seconds: 0.001, memoryMb: 256, threads: 1, waiting: 5 }).read(job)
    expect(problems).toMatchObject([{ id: 'tooMuchWork', severity: 'blocks', message: expect.stringContaining('longer than 0.001 s') }])
    expect(canStore).toBe(false)
  })

  it('is stopped when its memory is used up', async () => {
    const large = bytesOf(`tube,conc (mM),TI (ms),signal\n${Array.from({ length: 49_000 }, (_, i) => `t${i % 400},${i % 400},${i},${i}.123456789`).join('\n')}`)
    const { problems } = await threadReader({ seconds: 60, memoryMb: 24, threads: 1, waiting: 5 }).read({ ...job, bytes: large })
    expect(problems).toMatchObject([{ id: 'tooMuchWork', message: expect.stringContaining('24 MB') }])
  })

  it('does not let the line before it grow without end', async () => {
    const reader = threadReader({ seconds: 30, memoryMb: 256, threads: 1, waiting: 1 })
    const outcomes = await Promise.allSettled([reader.read(job), reader.read(job), reader.read(job)])
    expect(outcomes.map(outcome => outcome.status)).toEqual(['fulfilled', 'fulfilled', 'rejected'])
    expect(outcomes[2]).toMatchObject({ reason: { code: 'unavailable' } })
    expect((await reader.read(job)).problems.length).toBeGreaterThan(0)
  })
})

/** All of them where time is given. */
const IS_FULL = process.env.LANTHORN_TEST === 'full'
// Threads begin slowly where code runs from its sources; that they read the same is shown above.
const here = { ...deps, tables: { read: ({ bytes, kind, ...rest }: TableJob) => readTable(bytes, { ...rest, kind: measurement(kind) }) } }

describe('broken files on the way from staging to store', () => {
  const files = [...BROKEN.filter((_, index) => IS_FULL || index % 9 === 4).map(one => ({ ...one, isBroken: true })), ...mutants(504).filter((_, index) => IS_FULL || index % 21 === 0).map(one => ({ ...one, isBroken: false }))].filter(file => file.bytes.length > 0)

  it('every answer is typed, and nothing is half stored', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme, { lot: 'B2' })
    const key = { actor: programme.people.chemist, programmeId: programme.id }
    expect(files.length).toBeGreaterThan(35)
    for (const { name, bytes, isBroken } of files) {
      const staged = await stageUpload(deps, { ...key, files: [{ fileName: 'broken.xlsx', bytes }] }).catch((error: unknown) => error)
      if (staged instanceof AppError) {
        expect(staged.code, name).toBe('tooLarge')
        continue
      }
      if (staged instanceof Error) throw staged
      const { id } = staged as { id: string }
      const before = await storedRows(programme)
      const preview = PreviewDto.parse(await previewUpload(here, { ...key, id, draft }))
      if (isBroken) expect(preview.canStore, name).toBe(false)
      if (preview.canStore) continue
      await expect(confirmUpload(here, { ...key, id, draft }), name).rejects.toMatchObject({ code: 'invalidInput', details: { data: { problems: preview.problems } } })
      expect(await storedRows(programme), name).toBe(before)
    }
  }, 300_000)
})

describe('sending a file again because the answer was lost', () => {
  it('stages it once, whether one after the other or at once', async () => {
    const programme = await makeProgramme(deps)
    const send = (key: string, content = glowTable()) => stageUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, files: [{ fileName: 'a.csv', bytes: bytesOf(content) }], idempotency: { key, request: {} } })
    const first = await send('key-one-1')
    expect(await send('key-one-1')).toEqual(first)
    const [second, third] = await Promise.all([send('key-two-2'), send('key-two-2')])
    expect(second!.id).toBe(third!.id)
    expect(second!.id).not.toBe(first.id)
    const rows = await deps.db('upload_staged').where({ programme_id: toBinary(programme.id) }).count({ n: '*' }).first() as { n: number }
    expect(Number(rows.n)).toBe(2)
    expect((await deps.storage.keys('upload')).filter(key => key.includes(programme.id))).toHaveLength(2)
  })

  it('is refused where the key came with another file', async () => {
    const programme = await makeProgramme(deps)
    const send = (content: string) => stageUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, files: [{ fileName: 'a.csv', bytes: bytesOf(content) }], idempotency: { key: 'key-three', request: {} } })
    await send(glowTable())
    expect(await refusal(send(glowTable({ noise: 1 })))).toMatchObject({ code: 'conflict' })
  })
})

describe('names', () => {
  it('of files lose paths, control characters and marks that turn the writing', () => {
    expect(plainName('..\\..\\a\u202Etxt.exe')).toBe('atxt.exe')
    expect(plainName('C:/x/\u200Bphantom\u0007.xlsx')).toBe('phantom.xlsx')
  })

  it('of tubes that begin like formulas are stored as the texts they are', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme, { lot: 'B2' })
    const rows = longRows().map(row => row.map(cell => cell === 'n1' ? '=cmd|\'/C calc\'!A0' : cell === 'n2' ? '@SUM(1)' : cell))
    const id = await stage(deps, programme, utf8(joined(rows)))
    const { series } = await confirmUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft })
    const { tubes } = await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId: series[0]!.id })
    expect(tubes.map(tube => tube.label).slice(1, 3)).toEqual(['=cmd|\'/C calc\'!A0', '@SUM(1)'])
  })
})
