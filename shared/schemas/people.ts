import { z } from 'zod'
import { Email, GivenPassword, NewPassword, PersonName, Role } from './session'

export const Member = z.object({ personId: z.uuid(), name: z.string(), email: z.string(), roles: z.array(Role), isYou: z.boolean(), since: z.iso.datetime().nullable() })
export type Member = z.output<typeof Member>
export const Members = z.object({ members: z.array(Member) })

export const INVITATION_STATES = ['open', 'accepted', 'revoked', 'expired'] as const
export const InvitationRow = z.object({
  id: z.uuid(), email: z.string(), roles: z.array(Role), asAdministrator: z.boolean(), programmeName: z.string().nullable(), state: z.enum(INVITATION_STATES),
  invitedBy: z.string().nullable(), createdAt: z.iso.datetime(), expiresAt: z.iso.datetime(),
})
export type InvitationRow = z.output<typeof InvitationRow>
export const Invitations = z.object({ invitations: z.array(InvitationRow) })

export const Roles = z.array(Role).min(1, 'Choose at least one role; without one a person is no member.').max(4)
export const SetRoles = z.strictObject({ roles: Roles })
export const InviteMember = z.strictObject({ email: Email, roles: Roles })
/** The administrator invites the lead of a programme, or another administrator. */
export const InviteFromInstallation = z.discriminatedUnion('as', [
  z.strictObject({ as: z.literal('lead'), email: Email, programmeCode: z.string().max(40) }),
  z.strictObject({ as: z.literal('administrator'), email: Email }),
])

/**
 * What the holder of the link sees. knows: whether the address has an account already; signedInAs: 'invited' when the right person is signed in,
 * 'other' when somebody else is.
 */
export const InvitationShown = z.object({
  email: z.string(), roles: z.array(Role), asAdministrator: z.boolean(), programmeName: z.string().nullable(), invitedBy: z.string().nullable(), expiresAt: z.iso.datetime(),
  knows: z.boolean(), signedInAs: z.enum(['nobody', 'invited', 'other']),
})
export type InvitationShown = z.output<typeof InvitationShown>
export const AcceptInvitation = z.discriminatedUnion('as', [
  z.strictObject({ as: z.literal('newPerson'), name: PersonName, password: NewPassword }),
  z.strictObject({ as: z.literal('existing'), password: GivenPassword }),
  z.strictObject({ as: z.literal('signedIn') }),
])
export type AcceptInvitation = z.output<typeof AcceptInvitation>
export const Accepted = z.object({ programmeCode: z.string().nullable() })

export const ProgrammeSettings = z.object({ code: z.string(), name: z.string(), description: z.string(), partnerSeesRawFiles: z.boolean() })
export type ProgrammeSettings = z.output<typeof ProgrammeSettings>
export const ChangeSettings = z.strictObject({
  name: z.string().trim().min(1, 'A programme has a name.').max(120, 'A name has at most 120 characters.'),
  description: z.string().trim().max(2000, 'A description has at most 2000 characters.'), partnerSeesRawFiles: z.boolean(),
})

export const AuditRow = z.object({ seq: z.number().int(), at: z.iso.datetime(), personName: z.string().nullable(), command: z.string(), subject: z.string(), payload: z.string(), hash: z.string() })
export type AuditRow = z.output<typeof AuditRow>
export const AuditPage = z.object({ links: z.array(AuditRow), more: z.boolean() })
export const AuditQuery = z.object({ before: z.coerce.number().int().positive().optional() })
export const AuditVerdict = z.object({ whole: z.boolean(), links: z.number().int(), brokenAt: z.number().int().nullable(), why: z.string().nullable() })
export type AuditVerdict = z.output<typeof AuditVerdict>
