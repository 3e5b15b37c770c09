import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { lockSignedFit } from '../queries/fits'
import { insertSeriesEvent, seriesEvents } from '../queries/series'
import { openSeries } from './requestFit'
import { unitOfWork } from './unitOfWork'

export interface WithdrawInput { actor: Actor, programmeId: string, seriesId: string, reason: string, idempotency?: { key: string, request: unknown } | undefined }

/** Takes a series out of everything that counts; it stays to be read. Refused while a signed number rests on it: the signature is withdrawn first. */
export async function withdrawSeries(deps: Deps, { actor, programmeId, seriesId, reason, idempotency }: WithdrawInput): Promise<{ id: string, at: string }> {
  try {
    return await unitOfWork(deps, { actor, name: 'withdrawSeries', programmeId, idempotency }, async (work) => {
      const series = await openSeries(work.trx, programmeId, seriesId)
      const signed = await lockSignedFit(work.trx, programmeId, seriesId)
      if (signed) {
        throw new AppError('conflict', `${signed.personName} signed version ${signed.versionNo} of this series. Withdraw that signature first.`, { data: { personName: signed.personName, at: signed.at.toISOString(), versionNo: signed.versionNo } })
      }
      const seq = ((await seriesEvents(work.trx, programmeId, seriesId)).at(-1)?.seq ?? 0) + 1
      await insertSeriesEvent(work.trx, { id: work.id(), programmeId, seriesId, seq, event: 'withdrawn', reason, personId: actor.personId, at: work.now })
      return { result: { id: seriesId, at: work.now.toISOString() }, subject: `series ${seriesId}`, payload: { agent: series.agentCode, title: series.title, reason } }
    })
  }
  catch (error) {
    if (isDuplicate(error, 'step')) throw await eventConflict(deps, programmeId, seriesId)
    throw error
  }
}

/** Somebody else's event on the same series came first: who and when. */
export async function eventConflict(deps: Pick<Deps, 'db'>, programmeId: string, seriesId: string): Promise<AppError> {
  const last = (await seriesEvents(deps.db, programmeId, seriesId)).at(-1)
  if (!last) return new AppError('conflict', 'Somebody else changed this series meanwhile.')
  const what = last.event === 'withdrawn' ? 'withdrew' : 'corrected'
  return new AppError('conflict', `${last.personName} ${what} this series before you, at ${last.at.toISOString()}.`, { data: { personName: last.personName, at: last.at.toISOString() } })
}
