import { z } from 'zod'
import { CHECK_STATES } from '../checks/transitions'
import { Quantity } from '../evidence/quantity'
import { IONS, ionSymbol } from '../science/ligands/radii'
import { oneOf } from './accepted'
import { FigureSpec } from './figure'
import { StatedQuantity } from './agent'
import { TOPOLOGIES } from './ligand'

const SYMBOLS = IONS.map(ionSymbol) as [string, ...string[]]
const sites = (what: string, low: number, high: number) => z.coerce.number({ error: `${what} is not a number. Accepted: ${low} to ${high}.` })
  .int({ error: `${what} must be a whole number. Accepted: ${low} to ${high}.` }).min(low, { error: `${what} is too small. Accepted: ${low} to ${high}.` }).max(high, { error: `${what} is too large. Accepted: ${low} to ${high}.` })

/** For which metal, at which coordination number (left out: the most usual), with how many sites left to water, and with or without the starter library. */
export const LigandChoiceQuery = z.object({
  metal: oneOf('The metal', SYMBOLS).default('Gd'),
  coordination: sites('The coordination number', 4, 12).optional(),
  waters: sites('The number of waters', 0, 3).optional(),
  library: z.enum(['0', '1'], { error: 'With or without the starter library. Accepted: 1 or 0.' }).default('0'),
})
export type LigandChoiceQuery = z.output<typeof LigandChoiceQuery>

export const HINT_TOPICS = ['size', 'hardness', 'denticity', 'charge', 'shape'] as const
export const LigandHintDto = z.object({ about: z.enum(HINT_TOPICS), leaning: z.enum(['for', 'against', 'open']), reason: z.string() })

/** A value of a ligand with this metal. state null: literature from the starter library, with its source in words. */
export const LigandValueDto = z.object({ value: Quantity, state: z.enum(CHECK_STATES).nullable(), conditions: z.string(), source: z.string().nullable() })
export type LigandValueDto = z.output<typeof LigandValueDto>

/** log K from ΣpKa by the line through the signed ligands: never a measured value. The ends are those of the 95 % prediction interval. */
export const LigandEstimateDto = z.object({ logK: z.number(), low: z.number(), high: z.number(), warnings: z.array(z.string()) })

export const LigandChoiceRow = z.object({
  key: z.string(), code: z.string(), name: z.string(),
  origin: z.enum(['programme', 'literature']),
  topology: z.enum(TOPOLOGIES),
  /** Atoms of the ring; null for an open chain, and for a ring whose size its structure does not say. */
  ringAtoms: z.number().nullable(),
  denticity: z.number(), donors: z.string(), charge: z.number(), complexCharge: z.number(),
  hints: z.array(LigandHintDto),
  sumPKa: z.object({ value: z.number(), steps: z.number(), conditions: z.string() }).nullable(),
  logK: LigandValueDto.nullable(), estimate: LigandEstimateDto.nullable(),
  /** By acid and temperature; comparable with nothing measured in another acid. */
  acidHalfLives: z.array(LigandValueDto),
  /** Time to 99 % formed. */
  formation: LigandValueDto.nullable(),
  /** Of an agent with this metal at the programme's profile; null where there is no rate law, and for literature. */
  halfLife: StatedQuantity.nullable(),
  /** What no record says; null for those who see signed values only. */
  unknown: z.array(z.string()).nullable(),
  /** What is to be said of its numbers. */
  notes: z.array(z.string()),
  agents: z.array(z.string()),
})
export type LigandChoiceRow = z.output<typeof LigandChoiceRow>

export const LigandChoiceDto = z.object({
  metal: z.string(), ion: z.string(), radius_pm: z.number().nullable(), coordination: z.number(), waters: z.number(),
  /** Coordination numbers at which a radius is tabulated. */
  coordinations: z.array(z.number()),
  /** What the half-lives of the programme's agents belong to. */
  profile: z.string(),
  ligands: z.array(LigandChoiceRow),
  /** Which log K may be held against each other, and which may not, in words. */
  constants: z.array(z.string()),
  /** Pairs whose order by log K and by half-life in acid disagree. */
  disagreements: z.array(z.string()),
  /** log K against ΣpKa; null where no ligand has both. */
  figure: FigureSpec.nullable(),
  /** What the line rests on, or why there is none. */
  line: z.string(),
})
export type LigandChoiceDto = z.output<typeof LigandChoiceDto>
