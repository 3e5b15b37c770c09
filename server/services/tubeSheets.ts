import writeXlsxFile from 'write-excel-file/node'
import { AppError } from '../../shared/errors'
import { sheetRows } from '../../shared/measurements/sheetTable'
import type { MeasurementKind } from '../../shared/measurements/types'
import { csvText, fileNameFrom } from '../../shared/files/csv'
import type { Actor } from '../../shared/permissions'
import { canonicalJson } from '../../shared/science/canonical'
import { type ProposedDto, SHEET_ALPHABET, type SaveTubeSheet, type TubeSheet, type TubeSheetDto, type TubeSheetList } from '../../shared/schemas/tubeSheet'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { sha256 } from '../platform/hashes'
import { findTubeSheet, insertTubeSheet, listTubeSheets, type TubeSheetRow } from '../queries/tubeSheets'
import { shownCondition } from './showSeries'
import { unitOfWork } from './unitOfWork'

interface SaveInput { actor: Actor, programmeId: string, sheet: SaveTubeSheet, idempotency?: { key: string, request: unknown } | undefined }

const TRIES = 5

/** Keeps a sheet under a code of its own; it is never changed, another one takes its place. @throws AppError('invalidInput') for tubes of one name or a kind that is not there */
export async function saveTubeSheet(deps: Deps, { actor, programmeId, sheet, idempotency }: SaveInput): Promise<{ code: string }> {
  kindOf(deps, sheet.kind)
  const twice = sheet.tubes.find((tube, i) => sheet.tubes.some((other, j) => j < i && other.label.toLowerCase() === tube.label.toLowerCase()))
  if (twice) throw new AppError('invalidInput', `Two tubes are called ${twice.label}.`, { field: `tubes.${twice.tubeNo}`, accepted: 'a name of its own for each tube' })
  for (let attempt = 1; ; attempt++) {
    try {
      return await unitOfWork(deps, { actor, name: 'saveTubeSheet', programmeId, idempotency }, async (work) => {
        const id = work.id()
        const whole: TubeSheet = { ...sheet, code: codeFrom(id) }
        await insertTubeSheet(work.trx, { id, programmeId, sheet: whole, body: canonicalJson(whole), personId: actor.personId, at: work.now })
        return { result: { code: whole.code }, subject: `tube sheet ${whole.code}`, payload: { title: sheet.title, kind: sheet.kind, tubes: sheet.tubes.length } }
      })
    }
    catch (error) {
      if (attempt >= TRIES || !isDuplicate(error, 'code')) throw error
    }
  }
}

/** Six signs from the hash of the sheet's id: short enough to be written on a lid. */
function codeFrom(id: string): string {
  const hash = sha256(Buffer.from(id))
  return `TS-${Array.from(hash.subarray(0, 6), byte => SHEET_ALPHABET[byte % SHEET_ALPHABET.length]).join('')}`
}

export async function showTubeSheets(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId }: { programmeId: string }): Promise<TubeSheetList> {
  const rows = await listTubeSheets(deps.db, programmeId)
  return { sheets: rows.map(row => ({ code: row.code, title: row.title, kindTitle: deps.kinds[row.kind]?.title ?? row.kind, tubes: row.body.tubes.length, createdBy: row.createdByName, createdAt: row.createdAt.toISOString() })) }
}

/** @throws AppError('notFound') */
export async function showTubeSheet(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, code }: { programmeId: string, code: string }): Promise<TubeSheetDto> {
  const row = await ownSheet(deps, programmeId, code)
  const kind = kindOf(deps, row.kind)
  return {
    ...row.body, kindTitle: kind.title, createdBy: row.createdByName, createdAt: row.createdAt.toISOString(), x: shownX(kind, row.body.values),
    shownConditions: kind.conditions.flatMap((spec) => { const value = row.body.conditions[spec.key] ?? null; return value === null ? [] : [{ label: spec.label, shown: shownCondition(spec, value) }] }),
  }
}

/** The sheet as a file to fill in at the scanner: the upload recognises it by its code. */
export async function tubeSheetFile(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, code, form }: { programmeId: string, code: string, form: 'csv' | 'xlsx' }): Promise<{ fileName: string, bytes: Uint8Array }> {
  const { body } = await ownSheet(deps, programmeId, code)
  const rows = sheetRows(body, kindOf(deps, body.kind))
  const fileName = `${fileNameFrom(body.code, body.title)}.${form}`
  if (form === 'csv') return { fileName, bytes: Buffer.from(`\uFEFF${csvText(rows)}`, 'utf8') }
  const cells = rows.map(row => row.map(cell => cell === null || cell === '' ? null : typeof cell === 'number' ? { value: cell, type: Number } : { value: cell, type: String }))
  return { fileName, bytes: await writeXlsxFile(cells, { sheet: 'Signals' }).toBuffer() }
}

/** Times or angles that would measure tubes of these relaxation times; null where the kind proposes none. */
export async function proposeAcquisition(deps: Pick<Deps, 'kinds'>, { kind: id, shortest_s, longest_s, tr_s }: { kind: string, shortest_s: number, longest_s: number, tr_s?: number | undefined }): Promise<ProposedDto> {
  const kind = kindOf(deps, id)
  const proposed = kind.propose?.({ shortest_s: Math.min(shortest_s, longest_s), longest_s: Math.max(shortest_s, longest_s), tr_s: tr_s ?? null }) ?? null
  return proposed === null ? null : { ...shownX(kind, proposed.values), values: proposed.values, why: proposed.why }
}

function shownX(kind: MeasurementKind, values: readonly number[]): TubeSheetDto['x'] {
  const column = kind.columns.find(one => one.role === 'x')
  const unit = column?.dimension === 'time' ? 'ms' : column?.dimension === 'angle' ? '°' : ''
  const scale = unit === 'ms' ? 1e3 : unit === '°' ? 180 / Math.PI : 1
  return { label: column?.label ?? '', unit, shown: values.map(value => Number((value * scale).toPrecision(4))) }
}

async function ownSheet({ db }: Pick<Deps, 'db'>, programmeId: string, code: string): Promise<TubeSheetRow> {
  const row = await findTubeSheet(db, programmeId, code)
  if (!row) throw new AppError('notFound', `There is no tube sheet ${code} in this programme.`)
  return row
}

function kindOf({ kinds }: Pick<Deps, 'kinds'>, id: string): MeasurementKind {
  const kind = Object.hasOwn(kinds, id) ? kinds[id] : undefined
  if (!kind) throw new AppError('invalidInput', `No measurement is called ${id}.`, { field: 'kind', accepted: Object.keys(kinds).join(', ') })
  return kind
}

