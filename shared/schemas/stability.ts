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
export const HalfLifeDto = StabilityRowDto.pick({ id: true, code: true, mechanism: true, topology: true }).extend({ halfLife: StatedQuantity })
export type HalfLifeDto = z.output<typeof HalfLifeDto>

/** Half-lives in one acid at one temperature, longest first: comparable with one another and with nothing else. */
export const AcidTableDto = z.object({
  condition: z.string(),
  rows: z.array(StabilityRowDto.pick({ id: true, code: true, metal: true, mechanism: true, topology: true }).extend({ halfLife: StatedQuantity, logK: StatedQuantity.nullable() })),
  /** Pairs in which the one with the lower log K outlasts the other, in words. */
  remarks: z.array(z.string()),
})
export type AcidTableDto = z.output<typeof AcidTableDto>

export const StabilityDto = z.object({ conditions: StabilityConditions, agents: z.array(StabilityRowDto), inAcid: z.array(AcidTableDto) })
export type StabilityDto = z.output<typeof StabilityDto>

/** One constant that a species diagram uses: the species, what it is made of, and where the constant comes from; evidenceId null for those of the medium. */
export const SpeciesDto = z.object({ name: z.string(), stoichiometry: z.record(z.string(), z.number()), logBeta: z.number(), evidenceId: z.string().nullable() })
export type SpeciesDto = z.output<typeof SpeciesDto>

/** What a species diagram is drawn from. The metal of the agent is the component Ln, its ligand L; protons are H. */
export const SpeciationSystemDto = z.object({
  metal: z.string(),
  species: z.array(SpeciesDto),
  /** Competing metals with a constant for this ligand. */
  competitors: z.array(z.string()),
  /** Stepwise, most basic first, and the constants of the protonated and hydroxo complex and of the metal's hydroxide. */
  logK: z.number(), ligandProtonation: z.array(z.number()), complexProtonation: z.array(z.number()), complexHydroxide: z.array(z.number()), metalHydroxide: z.array(z.number()),
  /** What is to be said of these constants: bounds, other media, what is from the medium. */
  notes: z.array(z.string()),
})
export type SpeciationSystemDto = z.output<typeof SpeciationSystemDto>

export const AgentStabilityDto = z.object({
  conditions: StabilityConditions, agent: StabilityRowDto, records: z.array(RecordRowDto),
  /** Of all agents with a rate law, for the scale on which this one stands. */
  halfLives: z.array(HalfLifeDto),
  /** Null without log K and protonation constants. */
  speciation: SpeciationSystemDto.nullable(),
  conditionalFigure: FigureSpec.nullable(), rateFigure: FigureSpec.nullable(),
  /** What the plasma model takes for granted. */
  assumptions: z.array(z.string()),
})
export type AgentStabilityDto = z.output<typeof AgentStabilityDto>
