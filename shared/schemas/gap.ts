import { z } from 'zod'
import { codeOf, dayOf, lineOrNull, oneOf, wholeWithin } from './accepted'
import { MECHANISMS } from './agent'
import { TOPOLOGIES } from './ligand'

/** What may be missing of an agent. The three before readiness are there, but too vague or only a bound. */
export const GAP_KEYS = ['concentration', 'loss', 'freeMetal', 'equilibrium', 'zincPhosphate', 'ratio', 'competitors', 'sharperConcentration', 'sharperLoss', 'bound', 'readiness'] as const
export type GapKey = (typeof GAP_KEYS)[number]

export const GapAssignmentDto = z.object({ assigneeId: z.string(), assignee: z.string(), due: z.string(), note: z.string().nullable(), by: z.string(), at: z.string(), isOverdue: z.boolean() })
export type GapAssignmentDto = z.output<typeof GapAssignmentDto>

const Places = z.tuple([z.number(), z.number()]).readonly()

export const GapRowDto = z.object({
  agent: z.string(), mechanism: z.enum(MECHANISMS), topology: z.enum(TOPOLOGIES), key: z.enum(GAP_KEYS), what: z.string(), who: z.string(),
  /** Range of the agent's place now, and with the quantity held at its median; null where it has no place, or none can be told beforehand. */
  rankNow: Places.nullable(), rankThen: Places.nullable(),
  /** Places by which the range would close: at most, where the agent is not in the plane yet. */
  places: z.number(), isAtMost: z.boolean(),
  /** Of all places that are open on the map. */
  share_frac: z.number(),
  /** Limits of the profile that cannot be judged without it. */
  limits: z.array(z.string()),
  /** Why it settles nothing, or only with another; null where the numbers say it. */
  note: z.string().nullable(),
  assignment: GapAssignmentDto.nullable(),
  /** Version of the assignment as the person sees it; 0 = none yet. */
  seq: z.number().int(),
})
export type GapRowDto = z.output<typeof GapRowDto>

export const GapListDto = z.object({
  profile: z.string(), draws: z.number().int(), placed: z.number().int(), openPlaces: z.number(), gaps: z.array(GapRowDto),
  /** Who may be asked. */
  members: z.array(z.object({ id: z.string(), name: z.string() })),
})
export type GapListDto = z.output<typeof GapListDto>

export const AssignGap = z.strictObject({
  agent: codeOf('The agent'),
  key: oneOf('The gap', GAP_KEYS),
  expectedSeq: wholeWithin('The version of the assignment', 0, 100_000),
  /** null takes the task back. */
  task: z.strictObject({ assignee: z.uuid({ error: 'The person is not chosen. Accepted: a chemist, physicist or lead of the programme.' }), due: dayOf('The due day'), note: lineOrNull('The note', 1000) }).nullable(),
})
export type AssignGap = z.output<typeof AssignGap>

export const GapAssigned = z.object({ seq: z.number().int() })
/** A gap that a person is asked to close, as their Bench shows it. */
export const BenchTaskDto = z.object({ agent: z.string(), key: z.enum(GAP_KEYS), what: z.string(), assignment: GapAssignmentDto })
export type BenchTaskDto = z.output<typeof BenchTaskDto>
