import type { RouteLocationRaw } from 'vue-router'

/** What follows a sign-in: who it is, how they like things to look, and the page they were on their way to. */
export function useArrival() {
  const session = useSessionStore()
  const { apply } = usePreferences()
  return async (to?: RouteLocationRaw): Promise<void> => {
    const view = await session.load()
    if (view) apply(view.preferences)
    await navigateTo(to ?? '/')
  }
}

/** A path of ours out of a query, never an address elsewhere. */
export function ownPath(text: unknown): string | undefined {
  return typeof text === 'string' && /^\/(?![/\\])/.test(text) ? text : undefined
}
