import type { BatchPayload } from '../../shared/schemas/batch'
import { evidenceOfBatch } from '../../shared/evidence/freeMetal'
import { insertEvidence } from '../queries/evidence'
import { insertVersion } from '../queries/versions'
import type { Work } from './unitOfWork'

export interface BatchVersionParts { programmeId: string, personId: string, complexId: string, batchId: string, lot: string, versionNo: number, payload: BatchPayload }

/** A version of a batch with the evidence it emits, inside the command that makes it. @returns the version's id, which is what gets checked */
export async function storeBatchVersion(work: Work, one: BatchVersionParts): Promise<string> {
  const id = work.id()
  const { programmeId, complexId, batchId } = one
  await insertVersion(work.trx, 'batch', { id, programmeId, parentId: batchId, versionNo: one.versionNo, payload: one.payload, personId: one.personId, at: work.now })
  for (const draft of evidenceOfBatch(one.payload, one.lot)) {
    await insertEvidence(work.trx, { id: work.id(), programmeId, complexId, batchId, origin: { kind: 'batchVersion', id }, draft, at: work.now })
  }
  return id
}
