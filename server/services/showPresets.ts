import type { PresetsDto } from '../../shared/schemas/preset'
import type { Deps } from '../platform/deps'
import { listInstruments, listPresets } from '../queries/presets'
import { lastConditions } from '../queries/series'

/** Conditions that belong to one day or one file, and so to no preset. */
const NOT_KEPT = ['date', 'preparation']

/** What a form of conditions can start from: presets by name, known instruments, and the newest series of the kind. */
export async function showPresets({ db }: Pick<Deps, 'db'>, { programmeId, kind }: { programmeId: string, kind: string }): Promise<PresetsDto> {
  const [presets, instruments, last] = await Promise.all([listPresets(db, programmeId, kind), listInstruments(db, programmeId), lastConditions(db, programmeId, kind)])
  return {
    presets: presets.map(({ id, name, conditions, createdByName, updatedAt }) => ({ id, name, conditions, savedBy: createdByName, savedAt: updatedAt.toISOString() })),
    instruments, last: last ? { ...last, conditions: lasting(last.conditions), at: last.at.toISOString() } : null,
  }
}

/** Without what belongs to one day or file, and without what was left open. */
export function lasting<T>(conditions: Record<string, T>): Record<string, T> {
  return Object.fromEntries(Object.entries(conditions).filter(([key, value]) => value !== null && !NOT_KEPT.includes(key)))
}
