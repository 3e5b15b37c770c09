import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import type { ProfileVersionDto, SaveProfileInput } from '../../shared/schemas/profile'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { findProfileByName, findProfileVersion, insertProfile, insertProfileVersion, newestVersionOf } from '../queries/profiles'
import { profileDto } from './showMap'
import { unitOfWork, type Work } from './unitOfWork'

export interface SaveProfileCommand { actor: Actor, programmeId: string, body: SaveProfileInput, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Saves the next version of a screening profile, or the first of a new one. Versions are never changed: a decision names the one it was taken under.
 * @throws AppError('conflict') when somebody saved a version after the one this is based on
 */
export async function saveProfile(deps: Deps, { actor, programmeId, body, idempotency }: SaveProfileCommand): Promise<ProfileVersionDto> {
  const { name } = body.payload
  try {
    const id = await unitOfWork(deps, { actor, name: 'saveProfile', programmeId, idempotency }, async (work) => {
      const profileId = await profileOf(work, { programmeId, actor, name })
      const newest = await newestVersionOf(work.trx, programmeId, profileId)
      if ((newest?.versionNo ?? null) !== body.basedOn) throw savedBefore(newest)
      const versionNo = (newest?.versionNo ?? 0) + 1
      const versionId = work.id()
      await insertProfileVersion(work.trx, { id: versionId, programmeId, profileId, versionNo, payload: body.payload, note: body.note, personId: actor.personId, at: work.now })
      return { result: versionId, subject: `profile ${profileId}`, payload: { name, versionNo, note: body.note } }
    })
    return profileDto((await findProfileVersion(deps.db, programmeId, id))!)
  }
  catch (error) {
    if (!isDuplicate(error, 'version') && !isDuplicate(error, 'name')) throw error
    const profileId = await findProfileByName(deps.db, programmeId, name)
    throw savedBefore(profileId ? await newestVersionOf(deps.db, programmeId, profileId) : null)
  }
}

async function profileOf(work: Work, { programmeId, actor, name }: { programmeId: string, actor: Actor, name: string }): Promise<string> {
  const found = await findProfileByName(work.trx, programmeId, name)
  if (found) return found
  const id = work.id()
  await insertProfile(work.trx, { id, programmeId, name, personId: actor.personId, at: work.now })
  return id
}

function savedBefore(newest: { versionNo: number, personName: string, at: Date } | null): AppError {
  if (!newest) return new AppError('conflict', 'No version of this profile is saved yet.', { field: 'basedOn', accepted: 'null, for the first version' })
  return new AppError('conflict', `${newest.personName} saved version ${newest.versionNo} at ${newest.at.toISOString()}; yours is not based on it.`, {
    data: { personName: newest.personName, at: newest.at.toISOString(), versionNo: newest.versionNo },
  })
}
