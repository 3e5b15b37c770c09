import type { Knex } from 'knex'
import type { SignatureGround } from '../../shared/checks/transitions'
import type { AnalysisOutcome } from '../../shared/measurements/types'
import { toBinary } from '../platform/ids'

/** What decides whether one signature is enough for a fit version: points left out, and how far its slope is from the first version's. */
export async function readSignatureGround(db: Knex, programmeId: string, fitId: string): Promise<SignatureGround | null> {
  const row = await db('fit').where({ programme_id: toBinary(programmeId), id: toBinary(fitId) }).first('series_id', 'result') as { series_id: Buffer, result: string } | undefined
  if (!row) return null
  const first = await db('fit').where({ series_id: row.series_id, outcome: 'ok' }).orderBy('version_no').first('result') as { result: string } | undefined
  const now = JSON.parse(row.result) as AnalysisOutcome
  const before = first ? JSON.parse(first.result) as AnalysisOutcome : null
  const points = now.tubes.flatMap(tube => tube.points.map(point => tube.excluded ?? point.excluded))
  return {
    points: points.length,
    pointsLeftOut: points.filter(reason => reason !== null).length,
    first: before?.ok ? { value: before.series.headline.value, se: before.series.headline.se } : null,
    now: now.ok ? { value: now.series.headline.value } : null,
  }
}

/** Number of flags in a stored result, for the queue. */
export async function countFlags(db: Knex, fitIds: readonly string[]): Promise<Map<string, number>> {
  const rows = await db('fit').whereIn('id', fitIds.map(toBinary)).select('id', 'result') as { id: Buffer, result: string }[]
  return new Map(rows.map((row) => {
    const outcome = JSON.parse(row.result) as AnalysisOutcome
    const flags = outcome.tubes.reduce((sum, tube) => sum + tube.flags.length, 0) + (outcome.ok ? outcome.flags.length : 0)
    return [row.id.toString('hex'), flags]
  }))
}
