import { z } from 'zod'
import { Role } from './session'

export const InstallationPerson = z.object({
  personId: z.uuid(), name: z.string(), email: z.string(), isAdministrator: z.boolean(), isDemo: z.boolean(), isYou: z.boolean(), createdAt: z.iso.datetime(),
  memberships: z.array(z.object({ programmeCode: z.string(), programmeName: z.string(), roles: z.array(Role) })),
})
export type InstallationPerson = z.output<typeof InstallationPerson>
export const InstallationPeople = z.object({ people: z.array(InstallationPerson) })

/** Words of the first path part that are no programme. */
const RESERVED = ['admin', 'account', 'api', 'sign-in', 'invitation', 'reset', 'first', '_nuxt']
export const ProgrammeCode = z.string().trim().toLowerCase().regex(/^[a-z][a-z0-9-]{1,38}[a-z0-9]$/, 'A code has 3 to 40 letters, digits and hyphens, begins with a letter and does not end with a hyphen.')
  .refine(code => !RESERVED.includes(code), 'This word is taken by a page of the product; choose another code.')
export const CreateProgramme = z.strictObject({
  code: ProgrammeCode, name: z.string().trim().min(1, 'A programme has a name.').max(120, 'A name has at most 120 characters.'),
  description: z.string().trim().max(2000, 'A description has at most 2000 characters.'),
})
export const InstallationProgramme = z.object({
  programmeId: z.uuid(), code: z.string(), name: z.string(), description: z.string(), createdAt: z.iso.datetime(), members: z.number().int(), leads: z.array(z.string()),
})
export type InstallationProgramme = z.output<typeof InstallationProgramme>
export const InstallationProgrammes = z.object({ programmes: z.array(InstallationProgramme) })

export const SystemState = z.object({
  /** due: of the ready ones, those whose time has come. */
  jobs: z.object({ due: z.number().int(), ready: z.number().int(), running: z.number().int(), done: z.number().int(), parked: z.number().int(), cancelled: z.number().int() }),
  parked: z.array(z.object({ id: z.uuid(), kind: z.string(), attempts: z.number().int(), error: z.string().nullable(), createdAt: z.iso.datetime() })),
  processes: z.array(z.object({ name: z.string(), role: z.enum(['web', 'worker']), startedAt: z.iso.datetime(), silent_s: z.number(), engine: z.record(z.string(), z.string()) })),
  files: z.object({ count: z.number().int(), bytes: z.number() }),
  database: z.object({ version: z.string(), bytes: z.number(), migrations: z.number().int() }),
  lastMail: z.object({ to: z.string(), subject: z.string(), at: z.iso.datetime(), sent: z.boolean() }).nullable(),
})
export type SystemState = z.output<typeof SystemState>

export const SentMail = z.object({
  id: z.uuid(), to: z.string(), subject: z.string(), body: z.string(), createdAt: z.iso.datetime(), sent: z.boolean(), attempts: z.number().int(), lastError: z.string().nullable(),
})
export type SentMail = z.output<typeof SentMail>
/** isCaught: no mail server is set, every message stays on this machine. */
export const MailPage = z.object({ mail: z.array(SentMail), more: z.boolean(), isCaught: z.boolean() })
export const MailQuery = z.object({ page: z.coerce.number().int().min(0).max(10_000).default(0) })
