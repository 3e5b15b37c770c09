import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export interface InstrumentRow { id: string, name: string, b0_T: number }
export interface ReferenceTubeRow { seq: number, label: string, contents: string, since: Date, reason: string, createdByName: string, createdAt: Date }

/** A field is known to far fewer digits than the text protocol may lose. */
const toInstrument = (row: { id: Buffer, name: string, b0_T: number }): InstrumentRow => ({ id: fromBinary(row.id), name: row.name, b0_T: Number(row.b0_T.toPrecision(9)) })

export async function allInstruments(db: Knex, programmeId: string): Promise<InstrumentRow[]> {
  return (await db('instrument').where({ programme_id: toBinary(programmeId) }).orderBy('name').select('id', 'name', 'b0_T') as { id: Buffer, name: string, b0_T: number }[]).map(toInstrument)
}

export async function findInstrument(db: Knex, programmeId: string, id: string): Promise<InstrumentRow | null> {
  const row = await db('instrument').where({ programme_id: toBinary(programmeId), id: toBinary(id) }).first('id', 'name', 'b0_T') as { id: Buffer, name: string, b0_T: number } | undefined
  return row ? toInstrument(row) : null
}

/** Reference tubes of an instrument, the one that counts first. */
export async function referenceTubes(db: Knex, programmeId: string, instrumentId: string): Promise<ReferenceTubeRow[]> {
  const rows = await db('reference_tube').join('person', 'person.id', 'reference_tube.created_by')
    .where({ 'reference_tube.programme_id': toBinary(programmeId), instrument_id: toBinary(instrumentId) }).orderBy('seq', 'desc')
    .select('seq', 'label', 'contents', 'since', 'reason', 'person.name as person_name', 'reference_tube.created_at') as (Omit<ReferenceTubeRow, 'createdByName' | 'createdAt'> & { person_name: string, created_at: Date })[]
  return rows.map(({ person_name, created_at, ...row }) => ({ ...row, createdByName: person_name, createdAt: created_at }))
}

/** Names of the reference tubes that count now, by instrument. */
export async function currentReferences(db: Knex, programmeId: string): Promise<{ instrumentId: string, instrument: string, label: string, since: Date }[]> {
  const newest = db('reference_tube').where({ programme_id: toBinary(programmeId) }).groupBy('instrument_id').select('instrument_id').max('seq as seq').as('newest')
  const rows = await db('reference_tube as tube').join(newest, function join() { this.on('newest.instrument_id', 'tube.instrument_id').andOn('newest.seq', 'tube.seq') })
    .join('instrument', 'instrument.id', 'tube.instrument_id').where({ 'tube.programme_id': toBinary(programmeId) })
    .select('tube.instrument_id', 'instrument.name', 'tube.label', 'tube.since') as { instrument_id: Buffer, name: string, label: string, since: Date }[]
  return rows.map(row => ({ instrumentId: fromBinary(row.instrument_id), instrument: row.name, label: row.label, since: row.since }))
}

/** @throws a duplicate on the key `seq` when somebody named another tube meanwhile */
export async function insertReferenceTube(trx: Knex, row: { id: string, programmeId: string, instrumentId: string, seq: number, label: string, contents: string, since: Date, reason: string, personId: string, at: Date }): Promise<void> {
  await trx('reference_tube').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), instrument_id: toBinary(row.instrumentId), seq: row.seq, label: row.label, contents: row.contents, since: row.since, reason: row.reason,
    created_by: toBinary(row.personId), created_at: row.at,
  })
}

export interface ReadingRow { uploadId: string, seriesId: string, fitId: string, title: string, agentCode: string, label: string, kind: string, quantity: string, value: number, se: number | null, temperature_K: number | null, on: Date }
interface RawReading { upload_id: Buffer, series_id: Buffer, fit_id: Buffer, title: string, code: string, label: string, kind: string, quantity: string, value_text: string, se_text: string | null, temperature_K: number | null, on_day: Date }

/** What the newest fit of each series that still counts read of a tube of this name on this instrument, in order of time. */
export async function referenceReadings(db: Knex, programmeId: string, { instrument, label }: { instrument: string, label: string }): Promise<ReadingRow[]> {
  const rows = await db('reference_reading as reading')
    .join('series', 'series.id', 'reading.series_id').join('complex', 'complex.id', 'series.complex_id').join('fit', 'fit.id', 'reading.fit_id')
    .where({ 'reading.programme_id': toBinary(programmeId), 'reading.instrument': instrument, 'reading.label': label })
    .whereNotExists(db('fit as later').whereRaw('later.series_id = fit.series_id AND later.version_no > fit.version_no').select(db.raw('1')))
    .whereNotExists(db('series_event as event').whereRaw('event.series_id = series.id AND event.event = ?', ['withdrawn']).select(db.raw('1')))
    .whereNotExists(db('series as next').whereRaw('next.replaces = series.id').select(db.raw('1')))
    .select('series.upload_id', 'reading.series_id', 'reading.fit_id', 'series.title', 'complex.code', 'reading.label', 'reading.kind', 'reading.quantity', 'reading.value_text', 'reading.se_text', 'reading.temperature_K',
      db.raw('COALESCE(reading.measured_on, DATE(series.created_at)) AS on_day'))
    .orderBy('on_day').orderBy('series.created_at').orderBy('reading.series_id') as RawReading[]
  return rows.map(row => ({
    uploadId: fromBinary(row.upload_id), seriesId: fromBinary(row.series_id), fitId: fromBinary(row.fit_id), title: row.title, agentCode: row.code, label: row.label, kind: row.kind, quantity: row.quantity, value: Number(row.value_text),
    se: row.se_text === null ? null : Number(row.se_text), temperature_K: row.temperature_K === null ? null : Number(row.temperature_K.toPrecision(9)), on: row.on_day,
  }))
}

export async function insertReading(trx: Knex, row: Omit<ReadingRow, 'uploadId' | 'title' | 'agentCode' | 'on'> & { id: string, programmeId: string, instrument: string, tubeNo: number, measuredOn: string | null, at: Date }): Promise<void> {
  await trx('reference_reading').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), series_id: toBinary(row.seriesId), fit_id: toBinary(row.fitId), tube_no: row.tubeNo, label: row.label, instrument: row.instrument, kind: row.kind,
    quantity: row.quantity, value_text: String(row.value), se_text: row.se === null ? null : String(row.se), temperature_K: row.temperature_K, measured_on: row.measuredOn, created_at: row.at,
  })
}
