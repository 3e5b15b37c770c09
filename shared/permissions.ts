/**
 * The one permission table. A button asks can(), a route is refused by it, and a query takes its scope from it;
 * tests/api/permissions.test.ts walks every route against every role and compares with this page.
 *
 * Scopes: none      refused
 *         signed    rows of the programme that a named person has signed (partners)
 *         programme every row of the programme
 *         self      what belongs to the person asking
 *         installation  people, programmes and the state of the machine; never a measurement
 */
export type Scope = 'none' | 'signed' | 'programme' | 'self' | 'installation'
export const PROGRAMME_ROLES = ['chemist', 'physicist', 'lead', 'partner'] as const
export type ProgrammeRole = (typeof PROGRAMME_ROLES)[number]
/** member: anyone signed in. Rows with it concern the person, not a programme. */
export type Role = ProgrammeRole | 'administrator' | 'member'

type Row = Readonly<Record<Role, Scope>>
const none: Row = { chemist: 'none', physicist: 'none', lead: 'none', partner: 'none', administrator: 'none', member: 'none' }
const staff: Row = { ...none, chemist: 'programme', physicist: 'programme', lead: 'programme' }
const everyone: Row = { ...staff, partner: 'signed' }

export const PERMISSIONS = {
  'account.use': { ...none, member: 'self' },
  'programme.see': { ...none, chemist: 'programme', physicist: 'programme', lead: 'programme', partner: 'programme' },
  'programme.configure': { ...none, lead: 'programme' },
  'people.see': staff,
  'people.invite': { ...none, lead: 'programme' },
  'people.setRoles': { ...none, lead: 'programme' },
  'agent.see': everyone,
  'agent.register': { ...none, chemist: 'programme' },
  'batch.register': { ...none, chemist: 'programme' },
  'readiness.see': staff,
  'readiness.enter': { ...none, chemist: 'programme' },
  'upload.stage': { ...none, chemist: 'programme' },
  'upload.confirm': { ...none, chemist: 'programme' },
  // Partners only where the lead opened raw files, and then files behind a signed number: the service looks.
  'upload.bytes': everyone,
  'instrument.see': staff,
  'instrument.reference': { ...none, chemist: 'programme', physicist: 'programme' },
  'sheet.see': staff,
  'sheet.make': { ...none, chemist: 'programme', physicist: 'programme' },
  'series.see': everyone,
  'series.withdraw': { ...none, chemist: 'programme' },
  'series.correct': { ...none, chemist: 'programme' },
  'fit.request': { ...none, chemist: 'programme', physicist: 'programme' },
  'fit.repeat': { ...none, chemist: 'programme', physicist: 'programme' },
  'check.queue': { ...none, physicist: 'programme' },
  'check.see': staff,
  'check.submit': { ...none, chemist: 'programme' },
  'check.sign': { ...none, physicist: 'programme' },
  'check.return': { ...none, physicist: 'programme' },
  'check.withdraw': { ...none, physicist: 'programme' },
  'record.see': everyone,
  'ligand.see': everyone,
  'record.enter': { ...none, chemist: 'programme' },
  'library.copy': { ...none, chemist: 'programme' },
  'number.trace': everyone,
  'bench.see': staff,
  'gap.see': staff,
  'gap.assign': { ...none, lead: 'programme' },
  'map.see': everyone,
  'profile.save': { ...none, lead: 'programme' },
  'decision.see': { ...none, chemist: 'programme', physicist: 'programme', lead: 'programme', partner: 'programme' },
  'decision.record': { ...none, lead: 'programme' },
  'decision.acknowledge': { ...none, lead: 'programme' },
  'progress.follow': staff,
  'audit.seeProgramme': { ...none, lead: 'programme' },
  'installation.people': { ...none, administrator: 'installation' },
  'installation.programmes': { ...none, administrator: 'installation' },
  'installation.audit': { ...none, administrator: 'installation' },
  'installation.system': { ...none, administrator: 'installation' },
  'installation.mail': { ...none, administrator: 'installation' },
} as const satisfies Record<string, Row>

export type Permission = keyof typeof PERMISSIONS

export interface Membership {
  programmeId: string
  programmeCode: string
  roles: readonly ProgrammeRole[]
}

/** Who asks: read from the database on every request, so that a removed role is gone at once. Ids are UUID text. */
export interface Actor {
  personId: string
  sessionId: string
  name: string
  isAdministrator: boolean
  memberships: readonly Membership[]
}

/** Widest first: of several roles the widest scope counts. */
const WIDTH: readonly Scope[] = ['programme', 'signed', 'installation', 'self', 'none']

/**
 * The scope in which an actor holds a permission; for programme permissions, in that programme.
 * @returns 'none' when nothing allows it, which is also the answer for a programme the actor is no member of
 */
export function scopeOf(actor: Actor, permission: Permission, programmeId?: string): Scope {
  const row: Row = PERMISSIONS[permission]
  const roles = rolesOf(actor, programmeId)
  const scopes = roles.map(role => row[role])
  return WIDTH.find(scope => scopes.includes(scope)) ?? 'none'
}

/** The same question for a button: whether the actor may do it at all. */
export function can(actor: Actor, permission: Permission, programmeId?: string): boolean {
  return scopeOf(actor, permission, programmeId) !== 'none'
}

function rolesOf(actor: Actor, programmeId: string | undefined): Role[] {
  const installation: Role[] = actor.isAdministrator ? ['member', 'administrator'] : ['member']
  if (!programmeId) return installation
  const membership = actor.memberships.find(one => one.programmeId === programmeId)
  return membership ? [...installation, ...membership.roles] : installation
}
