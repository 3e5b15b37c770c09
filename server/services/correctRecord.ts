import type { Actor } from '../../shared/permissions'
import type { CorrectRecordInput } from '../../shared/schemas/record'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { findComplex } from '../queries/complexes'
import { findRecord, recordChain } from '../queries/records'
import { kindOf, storeRecordVersion } from './enterRecord'
import { changedMeanwhile, noSuchRecord } from './registryWords'
import { unitOfWork } from './unitOfWork'

export interface CorrectRecordCommand { actor: Actor, programmeId: string, recordId: string, body: CorrectRecordInput, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Adds the next version of a record, with its reason: the answer to a return, or a correction. The version before stays, with its check.
 * @throws AppError('conflict') when somebody else added the next version first, naming who and when
 */
export async function correctRecord(deps: Deps, { actor, programmeId, recordId, body, idempotency }: CorrectRecordCommand): Promise<{ id: string, rootId: string, versionNo: number }> {
  return await unitOfWork(deps, { actor, name: 'correctRecord', programmeId, idempotency }, async (work) => {
    const any = await findRecord(work.trx, programmeId, recordId, 'programme')
    if (!any) throw noSuchRecord()
    const refuse = async () => {
      const [newest] = await recordChain(work.trx, programmeId, any.rootId, 'programme', { latest: true })
      return changedMeanwhile('This record', newest ?? null)
    }
    const [newest] = await recordChain(work.trx, programmeId, any.rootId, 'programme')
    if (newest!.versionNo !== body.basedOn) throw await refuse()
    const complex = await findComplex(work.trx, programmeId, { id: any.complexId })
    const id = work.id()
    const versionNo = body.basedOn + 1
    try {
      await storeRecordVersion(work, {
        programmeId, actor, kind: kindOf(any.kind), complex: complex!, lot: body.lot, entry: body.entry, source: body.source, id, rootId: any.rootId, versionNo, replaces: newest!.id, reason: body.reason,
      })
    }
    catch (error) {
      if (isDuplicate(error, 'version') || isDuplicate(error, 'successor')) throw await refuse()
      throw error
    }
    return { result: { id, rootId: any.rootId, versionNo }, subject: `record ${id}`, payload: { ...body, replaces: newest!.id } }
  })
}
