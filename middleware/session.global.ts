/** First parts of paths that need no one signed in. */
const DOORS: readonly string[] = ['sign-in', 'invitation', 'reset', 'first']
const OWN: readonly string[] = ['account', 'admin']
/** How long what the frame knows about a person may be old before it is asked again with the next page. */
const FRESH_ms = 15_000

/**
 * Before every page: who is signed in, and whether the programme in the path is theirs. The server refuses again on its own; this decides which
 * page stands there. A programme one is no member of looks like one that does not exist.
 */
export default defineNuxtRouteMiddleware(async (to) => {
  const session = useSessionStore()
  const [first = ''] = to.path.split('/').filter(Boolean)
  const isProgramme = first !== '' && !DOORS.includes(first) && !OWN.includes(first)
  const askedAt = useState('session-asked', () => 0)
  if (!session.isLoaded || (import.meta.client && Date.now() - askedAt.value > FRESH_ms)) {
    await session.load(isProgramme ? { programme: first } : session.programmeCode ? { programme: session.programmeCode } : {})
    askedAt.value = Date.now()
  }
  if (DOORS.includes(first)) return session.person && first === 'sign-in' ? navigateTo('/') : undefined
  if (!session.person) return navigateTo({ path: '/sign-in', query: to.path === '/' ? {} : { to: to.fullPath } })
  if (first === 'admin' && !session.person.isAdministrator) return refuse()
  if (isProgramme && !session.choose(first)) return refuse()
})

const refuse = () => abortNavigation(createError({ statusCode: 404, statusMessage: 'Not Found', message: 'There is no such page, or it is not open to you.' }))
