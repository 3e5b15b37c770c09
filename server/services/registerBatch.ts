import type { Actor } from '../../shared/permissions'
import type { BatchPayload } from '../../shared/schemas/batch'
import type { Deps } from '../platform/deps'
import { findBatch, insertBatch } from '../queries/batches'
import { findComplex } from '../queries/complexes'
import { readVersions, whoAddedVersion } from '../queries/versions'
import { changedMeanwhile, noSuchAgent, noSuchBatch, orTaken, takenBy } from './registryWords'
import { storeBatchVersion } from './storeBatchVersion'
import { unitOfWork } from './unitOfWork'

interface BatchCommand { actor: Actor, programmeId: string, code: string, lot: string, payload: BatchPayload, idempotency?: { key: string, request: unknown } | undefined }

/** Adds a lot to an agent that is registered. @throws AppError('conflict') naming who registered the lot before */
export async function registerBatch(deps: Deps, { actor, programmeId, code, lot, payload, idempotency }: BatchCommand): Promise<{ id: string, versionNo: number }> {
  return await unitOfWork(deps, { actor, name: 'registerBatch', programmeId, idempotency }, async (work) => {
    const complex = await findComplex(work.trx, programmeId, { code })
    if (!complex) throw noSuchAgent()
    const batchId = work.id()
    await orTaken('lot', () => insertBatch(work.trx, { id: batchId, programmeId, complexId: complex.id, lot, personId: actor.personId, at: work.now }), async () =>
      takenBy({ what: `Lot ${lot} of`, code, field: 'lot', by: await findBatch(work.trx, programmeId, complex.id, lot, { latest: true }) }))
    const id = await storeBatchVersion(work, { programmeId, personId: actor.personId, complexId: complex.id, batchId, lot, versionNo: 1, payload })
    return { result: { id, versionNo: 1 }, subject: `batch ${batchId}`, payload: { code, lot, payload } }
  })
}

/** Adds a version to a batch: what was known before stays. @throws AppError('conflict') when `basedOn` is not the newest */
export async function addBatchVersion(deps: Deps, { basedOn, ...command }: BatchCommand & { basedOn: number }): Promise<{ id: string, versionNo: number }> {
  const { actor, programmeId, code, lot, payload, idempotency } = command
  return await unitOfWork(deps, { actor, name: 'addBatchVersion', programmeId, idempotency }, async (work) => {
    const complex = await findComplex(work.trx, programmeId, { code })
    if (!complex) throw noSuchAgent()
    const batch = await findBatch(work.trx, programmeId, complex.id, lot)
    if (!batch) throw noSuchBatch()
    const newest = (await readVersions(work.trx, 'batch', programmeId, batch.id))[0]!
    const refuse = async () => changedMeanwhile(`Lot ${lot}`, await whoAddedVersion(work.trx, 'batch', programmeId, batch.id, basedOn + 1))
    if (newest.versionNo !== basedOn) throw await refuse()
    let id = ''
    await orTaken('version', async () => {
      id = await storeBatchVersion(work, { programmeId, personId: actor.personId, complexId: complex.id, batchId: batch.id, lot, versionNo: basedOn + 1, payload })
    }, refuse)
    return { result: { id, versionNo: basedOn + 1 }, subject: `batch ${batch.id}`, payload: { code, lot, versionNo: basedOn + 1, payload } }
  })
}
