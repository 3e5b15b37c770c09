import { defineStore } from 'pinia'
import { can, type Actor, type Permission, type ProgrammeRole } from '#shared/permissions'

export interface SessionPerson { personId: string, name: string, email: string, isAdministrator: boolean }
export interface SessionMembership { programmeId: string, programmeCode: string, programmeName: string, roles: ProgrammeRole[] }
/** What stands beside the words of the frame; null where the person may not know. */
export interface SessionCounts { checks: number | null }
export interface SessionView { person: SessionPerson, memberships: SessionMembership[], counts?: SessionCounts }

const NO_COUNTS: SessionCounts = { checks: null }

/** Who is signed in, in which programme they are looking, and what the frame counts. The server decides; this only shows. */
export const useSessionStore = defineStore('session', () => {
  const person = ref<SessionPerson | null>(null)
  const memberships = ref<SessionMembership[]>([])
  const programmeCode = ref<string | null>(null)
  const counts = ref<SessionCounts>(NO_COUNTS)

  const membership = computed(() => memberships.value.find(one => one.programmeCode === programmeCode.value) ?? null)
  const roles = computed<readonly ProgrammeRole[]>(() => membership.value?.roles ?? [])
  const actor = computed<Actor | null>(() => person.value && {
    personId: person.value.personId, sessionId: '', name: person.value.name, isAdministrator: person.value.isAdministrator, memberships: memberships.value,
  })

  function accept(view: SessionView): void {
    person.value = view.person
    memberships.value = view.memberships
    counts.value = view.counts ?? NO_COUNTS
    if (!membership.value) programmeCode.value = view.memberships[0]?.programmeCode ?? null
  }
  /** @returns false, and nothing changes, when the person is no member of that programme */
  function choose(code: string): boolean {
    const known = memberships.value.find(one => one.programmeCode.toLowerCase() === code.toLowerCase())
    if (known) programmeCode.value = known.programmeCode
    return known !== undefined
  }
  function clear(): void {
    person.value = null
    memberships.value = []
    programmeCode.value = null
    counts.value = NO_COUNTS
  }
  /** Ends the session on the server first; only then is the person forgotten here. */
  async function signOut(): Promise<void> {
    await useNuxtApp().$csrfFetch('/api/session', { method: 'DELETE' })
    clear()
    await navigateTo('/sign-in')
  }
  /** Whether to show a button in the programme looked at. The route asks the same table again. */
  function may(permission: Permission): boolean {
    return actor.value !== null && can(actor.value, permission, membership.value?.programmeId)
  }

  return { person, memberships, programmeCode, counts, membership, roles, accept, choose, clear, signOut, may }
})
