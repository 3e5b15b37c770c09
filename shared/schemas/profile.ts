import { z } from 'zod'
import { PROFILE_FIELDS, profileProblems } from '../science/placement/profileFields'
import type { ScreeningProfile } from '../science/placement/profile'
import { lineOf, numberWithin, oneOf } from './accepted'

/** A screening profile as it is saved: every number within the ends that its form states, ranges that hold their value. The rules are those the form shows. */
export const ProfilePayload = z.strictObject({
  name: lineOf('The name of the profile', 120),
  mechanism: oneOf('The mechanism', ['T1', 'T2', 'CEST']),
  medium: oneOf('The medium', ['plasma', 'blood', 'aqueous']),
  eliminationSpecies: oneOf('The species of the elimination half-life', ['human', 'mouse', 'other']),
  ...Object.fromEntries(PROFILE_FIELDS.map(field => [field.key, numberWithin(field.label, field.min, field.max, field.unit)])),
}).superRefine((profile, context) => {
  for (const { key, message, accepted } of profileProblems(profile as unknown as ScreeningProfile)) context.addIssue({ code: 'custom', path: [key], message: `${message}. Accepted: ${accepted}.` })
}) as unknown as z.ZodType<ScreeningProfile>

/** basedOn: the version that the person looked at; null = none was saved under this name yet. */
export const SaveProfileInput = z.strictObject({
  payload: ProfilePayload,
  basedOn: z.number().int().min(1).nullable(),
  note: z.string().trim().max(500, { error: 'The note is too long. Accepted: at most 500 characters.' }).default(''),
})
export type SaveProfileInput = z.output<typeof SaveProfileInput>

export const ProfileVersionDto = z.object({
  id: z.string(), profileId: z.string(), name: z.string(), versionNo: z.number().int(), payload: z.custom<ScreeningProfile>(), note: z.string(), by: z.string(), at: z.string(),
})
export type ProfileVersionDto = z.output<typeof ProfileVersionDto>
