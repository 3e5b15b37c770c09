import { PROFILE_FIELDS, type ProfileNumberKey } from '../science/placement/profileFields'
import type { ScreeningProfile } from '../science/placement/profile'

/** What a link to the map carries: everything that is not as the page opens by itself. */
export interface MapView {
  /** Code of the agent looked at. */
  agent: string | null
  /** Codes on the shortlist. */
  shortlist: readonly string[]
  /** Switched off in the key. */
  hidden: readonly string[]
  table: boolean
  includesUnsigned: boolean
  ellipses: boolean
  front: boolean
  /** Version of the profile that is open; null = the one that opens by itself. */
  profileId: string | null
  /** Numbers of the profile that were changed and not saved. */
  changes: Readonly<Partial<Record<ProfileNumberKey, number>>>
}

export type MapQuery = Record<string, string>

/** The view as the part of an address behind "?". What is as usual is left out. */
export function writeMapQuery(view: MapView): MapQuery {
  const changes = Object.entries(view.changes).map(([key, value]) => `${key}:${value}`)
  const pairs: [string, string | null][] = [
    ['agent', view.agent], ['shortlist', view.shortlist.join(',')], ['off', [...view.hidden, ...(view.ellipses ? [] : ['ellipses']), ...(view.front ? [] : ['front']), ...(view.includesUnsigned ? [] : ['unsigned'])].join(',')],
    ['view', view.table ? 'table' : null], ['profile', view.profileId], ['set', changes.join(',')],
  ]
  return Object.fromEntries(pairs.filter((pair): pair is [string, string] => Boolean(pair[1])))
}

/** Reads an address back. What it does not know, or what is no number within the field's range, is left as usual: links grow old. */
export function readMapQuery(query: Readonly<Record<string, unknown>>): MapView {
  const text = (key: string): string | null => typeof query[key] === 'string' && query[key] !== '' ? query[key] : null
  const list = (key: string): string[] => text(key)?.split(',').filter(Boolean) ?? []
  const off = list('off')
  return {
    agent: text('agent'), shortlist: list('shortlist'), hidden: off.filter(one => !['ellipses', 'front', 'unsigned'].includes(one)), table: query.view === 'table',
    includesUnsigned: !off.includes('unsigned'), ellipses: !off.includes('ellipses'), front: !off.includes('front'), profileId: text('profile'),
    changes: Object.fromEntries(list('set').flatMap(readChange)),
  }
}

function readChange(text: string): [ProfileNumberKey, number][] {
  const [key, written] = text.split(':')
  const field = PROFILE_FIELDS.find(one => one.key === key)
  const value = written === undefined || written === '' ? NaN : Number(written)
  return field && value >= field.min && value <= field.max ? [[field.key, value]] : []
}

/** Numbers in which a profile differs from the one it began as. */
export function changesOf(draft: ScreeningProfile, start: ScreeningProfile): Partial<Record<ProfileNumberKey, number>> {
  return Object.fromEntries(PROFILE_FIELDS.filter(({ key }) => draft[key] !== start[key]).map(({ key }) => [key, draft[key]]))
}
