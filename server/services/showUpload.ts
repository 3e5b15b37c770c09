import { UploadDraft } from '../../shared/measurements/draft'
import type { Actor } from '../../shared/permissions'
import type { StagedUploadDto } from '../../shared/schemas/upload'
import type { Deps } from '../platform/deps'
import { hex } from '../platform/hashes'
import { type StagedRow, uploadsWithBytes } from '../queries/uploads'
import { ownStaged } from './uploadReading'

/** A staged upload as its owner left it, and whether the programme has seen the same bytes before. */
export async function showUpload(deps: Pick<Deps, 'db'>, { actor, programmeId, id }: { actor: Actor, programmeId: string, id: string }): Promise<StagedUploadDto> {
  return stagedDto(deps, await ownStaged(deps, { programmeId, personId: actor.personId, id }))
}

export async function stagedDto({ db }: Pick<Deps, 'db'>, staged: StagedRow): Promise<StagedUploadDto> {
  const before = await uploadsWithBytes(db, staged.programmeId, staged.sha256)
  return {
    id: staged.id, fileName: staged.fileName, bytes: staged.bytes, sha256: hex(staged.sha256), state: staged.state, stagedAt: staged.createdAt.toISOString(),
    expiresAt: staged.expiresAt.toISOString(), draft: UploadDraft.parse(JSON.parse(staged.draft)), seenBefore: before.map(one => ({ ...one, at: one.at.toISOString() })),
  }
}
