import { z } from 'zod'
import { PROGRAMME_ROLES } from '../permissions'

/** Shortest and longest password, in characters. Length is the only rule: rules of composition make worse passwords. */
export const PASSWORD_MIN = 12
export const PASSWORD_MAX = 200
export const PASSWORD_ACCEPTED = `${PASSWORD_MIN} to ${PASSWORD_MAX} characters of any kind`

export const NewPassword = z.string().refine(text => [...text].length >= PASSWORD_MIN && [...text].length <= PASSWORD_MAX, `A password has ${PASSWORD_ACCEPTED}.`)
/** A password typed to prove who somebody is; only its size is looked at. */
export const GivenPassword = z.string().min(1, 'Type the password.').max(1000, 'This is longer than any password here.')
export const Email = z.string().trim().toLowerCase().max(254, 'An e-mail address has at most 254 characters.').pipe(z.email('This is no e-mail address; accepted is one such as name@institute.example.'))
export const PersonName = z.string().trim().min(1, 'Type a name.').max(120, 'A name has at most 120 characters.')
export const Role = z.enum(PROGRAMME_ROLES)
/** 256 random bits, base64url. */
export const Token = z.string().regex(/^[\w-]{43}$/, 'This link is cut short or mistyped.')

export const Theme = z.enum(['system', 'light', 'dark'])
export const Preferences = z.strictObject({ theme: Theme, singleKeys: z.boolean(), mechanismWords: z.boolean() })
export type Preferences = z.output<typeof Preferences>
export const DEFAULT_PREFERENCES: Preferences = { theme: 'system', singleKeys: true, mechanismWords: false }

export const SessionPerson = z.object({ personId: z.uuid(), name: z.string(), email: z.string(), isAdministrator: z.boolean(), isDemo: z.boolean() })
export type SessionPerson = z.output<typeof SessionPerson>
export const SessionMembership = z.object({ programmeId: z.uuid(), programmeCode: z.string(), programmeName: z.string(), roles: z.array(Role) })
export type SessionMembership = z.output<typeof SessionMembership>
/** What stands beside the words of the frame; null where the person may not know. */
export const SessionCounts = z.object({ checks: z.number().int().nullable() })
export type SessionCounts = z.output<typeof SessionCounts>
export const SessionView = z.object({ person: SessionPerson, memberships: z.array(SessionMembership), preferences: Preferences, counts: SessionCounts })
export type SessionView = z.output<typeof SessionView>
/** signedIn: null when nobody is. */
export const SessionAnswer = z.object({ signedIn: SessionView.nullable() })
export type SessionAnswer = z.output<typeof SessionAnswer>

export const SignIn = z.strictObject({ email: Email, password: GivenPassword })
export const DemoAccounts = z.object({ password: z.string(), accounts: z.array(z.object({ name: z.string(), email: z.string(), roles: z.array(z.enum([...PROGRAMME_ROLES, 'administrator'])) })) })
export type DemoAccounts = z.output<typeof DemoAccounts>

export const ChangePassword = z.strictObject({ current: GivenPassword, next: NewPassword })
export const ChangeName = z.strictObject({ name: PersonName })
export const OwnSessions = z.object({ sessions: z.array(z.object({ id: z.uuid(), startedAt: z.iso.datetime(), expiresAt: z.iso.datetime(), isThis: z.boolean() })) })
export type OwnSessions = z.output<typeof OwnSessions>

export const AskReset = z.strictObject({ email: Email })
export const ResetShown = z.object({ email: z.string(), expiresAt: z.iso.datetime() })
export const ResetPassword = z.strictObject({ password: NewPassword })
export const FirstAdministrator = z.strictObject({ name: PersonName, email: Email, password: NewPassword })
export const Nothing = z.object({})
export const Done = z.object({ done: z.literal(true) })
