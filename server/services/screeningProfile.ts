import type { Knex } from 'knex'
import { DEFAULT_PROFILE, type ScreeningProfile } from '../../shared/science/placement/profile'
import { newestProfile } from '../queries/newestProfile'

export interface ProfileInUse { profile: ScreeningProfile, name: string, versionNo: number | null }

/**
 * The profile under which pages outside the map judge: the version saved last, or the starting values, named as such. A field that an older version does
 * not have takes its starting value.
 */
export async function screeningProfile(db: Knex, programmeId: string): Promise<ProfileInUse> {
  const saved = await newestProfile(db, programmeId)
  if (!saved || typeof saved.payload !== 'object' || saved.payload === null) return { profile: DEFAULT_PROFILE, name: `${DEFAULT_PROFILE.name}, starting values, not saved`, versionNo: null }
  return { profile: { ...DEFAULT_PROFILE, ...saved.payload }, name: `${saved.name}, version ${saved.versionNo}`, versionNo: saved.versionNo }
}
