import { z } from 'zod'
import { AgentRowDto, StatedQuantity } from './agent'
import { FigureSpec } from './figure'
import { RecordRowDto } from './record'

export const VerdictDto = z.object({
  equilibrium: z.enum(['holds', 'condemns', 'not known']), kinetics: z.enum(['holds', 'letsGo', 'not known']),
  equilibriumSentence: z.string(), kineticsSentence: z.string(), disagree: z.boolean(), summary: z.string(),
  inWords: z.string(), mapUses: z.enum(['kinetics', 'neither']), why: z.string(),
})

/** What equilibrium and kinetics say of one agent under the profile. */
export const StabilityRowDto = AgentRowDto.pick({ id: true, code: true, metal: true, mechanism: true, topology: true, ligand: true, signed: true }).extend({
  logK: StatedQuantity.nullable(), logKConditional: StatedQuantity.nullable(), pM: StatedQuantity.nullable(), bound: StatedQuantity.nullable(),
  kd: StatedQuantity.nullable(), halfLife: StatedQuantity.nullable(), loss: StatedQuantity.nullable(), acidHalfLife: StatedQuantity.nullable(), zincPhosphate: StatedQuantity.nullable(),
  /** How far the profile's pH lies outside the measured range, in powers of ten of [H+]; null where no range is stated. */
  decades: z.number().nullable(),
  verdict: VerdictDto,
  flags: z.array(z.string()),
})
export type StabilityRowDto = z.output<typeof StabilityRowDto>

/** Conditions that the derived values belong to, in words for heads of columns. */
export const StabilityConditions = z.object({ profileName: z.string(), pH: z.number(), temperature_K: z.number(), competitors: z.string(), residence: z.string(), residence_s: z.number() })
export const StabilityDto = z.object({ conditions: StabilityConditions, agents: z.array(StabilityRowDto) })
export type StabilityDto = z.output<typeof StabilityDto>

export const AgentStabilityDto = z.object({
  conditions: StabilityConditions, agent: StabilityRowDto, records: z.array(RecordRowDto),
  conditionalFigure: FigureSpec.nullable(), rateFigure: FigureSpec.nullable(),
  /** What the plasma model takes for granted. */
  assumptions: z.array(z.string()),
})
export type AgentStabilityDto = z.output<typeof AgentStabilityDto>
