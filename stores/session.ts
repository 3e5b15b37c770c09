import { defineStore } from 'pinia'
import { can, type Actor, type Permission, type ProgrammeRole } from '#shared/permissions'
import type { SessionAnswer, SessionCounts, SessionMembership, SessionPerson, SessionView } from '#shared/schemas/session'

const NO_COUNTS: SessionCounts = { checks: null }

/** Who is signed in, in which programme they are looking, and what the frame counts. The server decides; this only shows. */
export const useSessionStore = defineStore('session', () => {
  const person = ref<SessionPerson | null>(null)
  const memberships = ref<SessionMembership[]>([])
  const programmeCode = ref<string | null>(null)
  const counts = ref<SessionCounts>(NO_COUNTS)
  /** Whether the server was asked yet. */
  const isLoaded = ref(false)

  const membership = computed(() => memberships.value.find(one => one.programmeCode === programmeCode.value) ?? null)
  const roles = computed<readonly ProgrammeRole[]>(() => membership.value?.roles ?? [])
  const actor = computed<Actor | null>(() => person.value && {
    personId: person.value.personId, sessionId: '', name: person.value.name, isAdministrator: person.value.isAdministrator, memberships: memberships.value,
  })

  function accept(view: Pick<SessionView, 'person' | 'memberships' | 'counts'>): void {
    person.value = view.person
    memberships.value = view.memberships
    counts.value = view.counts
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
  /** Asks the server who is signed in. `programme`: the programme looked at, for what the frame counts there. */
  async function load({ programme }: { programme?: string } = {}): Promise<SessionView | null> {
    const { signedIn } = await useRequestFetch()<SessionAnswer>('/api/session', { query: programme ? { programme } : {} })
    if (signedIn) accept(signedIn)
    else clear()
    isLoaded.value = true
    return signedIn
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

  return { isLoaded, load, person, memberships, programmeCode, counts, membership, roles, accept, choose, clear, signOut, may }
})
