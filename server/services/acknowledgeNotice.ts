import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { findNotice, insertNoticeAck, listNotices } from '../queries/notices'
import { unitOfWork } from './unitOfWork'

export interface AcknowledgeCommand { actor: Actor, programmeId: string, id: string, note: string, idempotency?: { key: string, request: unknown } | undefined }

/** A lead has seen that the ground moved and says what they made of it. The decision itself does not change. */
export async function acknowledgeNotice(deps: Deps, { actor, programmeId, id, note, idempotency }: AcknowledgeCommand): Promise<{ id: string }> {
  const notice = await findNotice(deps.db, programmeId, id)
  if (!notice) throw new AppError('notFound', 'There is no such notice, or it is not open to you.')
  try {
    return await unitOfWork(deps, { actor, name: 'acknowledgeNotice', programmeId, idempotency }, async (work) => {
      await insertNoticeAck(work.trx, { id: work.id(), programmeId, noticeId: id, note, personId: actor.personId, at: work.now })
      return { result: { id }, subject: `notice ${id}`, payload: { decisionId: notice.decisionId, note } }
    })
  }
  catch (error) {
    if (!isDuplicate(error, 'once')) throw error
    const ack = (await listNotices(deps.db, programmeId, notice.decisionId)).find(one => one.id === id)?.ack
    throw new AppError('conflict', `${ack?.by ?? 'Somebody'} acknowledged this already.`, { data: { personName: ack?.by, at: ack?.at.toISOString() } })
  }
}
