import type { Actor } from '../shared/permissions'

declare module 'h3' {
  interface H3EventContext {
    /** Who asks; null = not signed in. Set by server/middleware/actor.ts on every API request. */
    actor?: Actor | null
    requestId?: string
  }
}
