import type { Actor } from '../../shared/permissions'
import type { Deps } from '../platform/deps'
import { settleStaged } from '../queries/uploads'
import { unitOfWork } from './unitOfWork'
import { ownStaged, refuseUnlessStaged } from './uploadReading'

/** Ends a staged upload; a job removes its bytes. @throws AppError('conflict') when it was stored or discarded before */
export async function discardUpload(deps: Deps, { actor, programmeId, id, idempotency }: { actor: Actor, programmeId: string, id: string, idempotency?: { key: string, request: unknown } | undefined }): Promise<{ done: true }> {
  const key = { programmeId, personId: actor.personId, id }
  const staged = await ownStaged(deps, key)
  return unitOfWork(deps, { actor, name: 'discardUpload', programmeId, idempotency }, async (work) => {
    if (!await settleStaged(work.trx, id, 'discarded')) refuseUnlessStaged(await ownStaged({ db: work.trx }, key), work.now)
    await work.enqueue({ kind: 'uploads.sweep', dedupeKey: `uploads.sweep:${id}`, payload: { storageKey: staged.storageKey }, maxAttempts: 5 })
    return { result: { done: true }, subject: `upload ${id}`, payload: { fileName: staged.fileName } }
  })
}
