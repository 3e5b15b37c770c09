import { defineStore } from 'pinia'
import type { ProfileVersionDto } from '#shared/schemas/profile'
import { DEFAULT_PROFILE, type ScreeningProfile } from '#shared/science/placement/profile'
import { profileProblems } from '#shared/science/placement/profileFields'

/**
 * The screening profile that the map is read under: a saved version, or one of its numbers changed and not saved. While no version is saved the starting
 * values hold, and say so.
 */
export const useProfileStore = defineStore('profile', () => {
  const versions = shallowRef<readonly ProfileVersionDto[]>([])
  const baseId = ref<string | null>(null)
  const draft = shallowRef<ScreeningProfile>(DEFAULT_PROFILE)
  /** The last profile without a problem: marks stand by it while a field is being typed. */
  const usable = shallowRef<ScreeningProfile>(DEFAULT_PROFILE)

  const base = computed(() => versions.value.find(one => one.id === baseId.value) ?? null)
  const start = computed(() => base.value?.payload ?? DEFAULT_PROFILE)
  const isChanged = computed(() => (Object.keys(draft.value) as (keyof ScreeningProfile)[]).some(key => draft.value[key] !== start.value[key]))
  const problems = computed(() => profileProblems(draft.value))
  /** Newest saved version of the profile that the draft would be the next version of; null = it would be the first. */
  const newest = computed(() => versions.value.filter(one => one.name === draft.value.name).toSorted((a, b) => b.versionNo - a.versionNo)[0] ?? null)

  function take(next: ScreeningProfile): void {
    draft.value = next
    if (profileProblems(next).length === 0) usable.value = next
  }
  /** Takes what the server has. A draft that a person has changed stays as it is. */
  function accept(list: readonly ProfileVersionDto[]): void {
    const wasChanged = isChanged.value && versions.value.length > 0
    const known = list.some(one => one.id === baseId.value)
    versions.value = list
    if (!wasChanged && !known) open(list[0]?.id ?? null)
  }
  /** Shows a saved version; null = the starting values. */
  function open(id: string | null): void {
    baseId.value = id
    take(start.value)
  }
  function change<K extends keyof ScreeningProfile>(key: K, value: ScreeningProfile[K]): void {
    take({ ...draft.value, [key]: value })
  }
  /** A version that was just saved here. */
  function saved(version: ProfileVersionDto): void {
    versions.value = [version, ...versions.value.filter(one => one.id !== version.id)]
    open(version.id)
  }

  return { versions, baseId, draft, usable, base, start, isChanged, problems, newest, accept, open, change, saved }
})
