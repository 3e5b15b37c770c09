import type { Permission } from '#shared/permissions'

/** A page that a person's roles do not open says so at once, instead of a form whose button is refused. @throws error page 403 */
export function refuseUnless(permission: Permission): void {
  if (!useSessionStore().may(permission)) throw createError({ statusCode: 403, statusMessage: 'Forbidden', message: 'Your roles in this programme do not allow this.' })
}
