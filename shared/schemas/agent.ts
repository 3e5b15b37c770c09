import { z } from 'zod'
import { CHECK_STATES } from '../checks/transitions'
import { EvidenceItemDto } from '../evidence/item'
import { Quantity } from '../evidence/quantity'
import { codeOf, lineOf, lineOrNull, numberWithin, oneOf, wholeWithin } from './accepted'
import { BatchDto, BatchPayload, Lot } from './batch'
import { LigandCode, LigandDto, LigandPayload, TOPOLOGIES, VersionMark } from './ligand'
import { MetalSymbol } from './metal'
import { RecordRowDto } from './record'
import { StructureDrawing } from './structure'

export const MECHANISMS = ['T1', 'T2', 'CEST'] as const

export const ComplexPayload = z.strictObject({
  metal: MetalSymbol,
  /** Water molecules bound to the metal; fractions occur in mixtures of forms. */
  q: numberWithin('The hydration number q', 0, 9).nullable().default(null),
  qSource: lineOrNull('The source of q', 300),
  molarMass_g_per_mol: numberWithin('The molar mass', 100, 20000, 'g/mol'),
  charge: wholeWithin('The charge of the complex', -12, 6),
  mechanism: oneOf('The mechanism', MECHANISMS),
  /** The q of a gadolinium agent is that of its Eu or Tb analogue, and is labelled so. */
  analogueNote: lineOrNull('The note on the analogue', 300),
}).refine(one => one.q === null || one.qSource !== null, { path: ['qSource'], error: 'A hydration number needs its source. Accepted: how it was found, such as "luminescence of the Eu analogue".' })
export type ComplexPayload = z.output<typeof ComplexPayload>

export const AgentCode = codeOf('The code of the agent', 40)
export const AgentParams = z.object({ programme: z.string(), code: z.string().max(60) })
export const BatchParams = AgentParams.extend({ lot: z.string().max(60) })

export const RegisterAgentInput = z.strictObject({
  ligand: z.discriminatedUnion('kind', [
    z.strictObject({ kind: z.literal('new'), code: LigandCode, payload: LigandPayload }),
    z.strictObject({ kind: z.literal('existing'), code: LigandCode }),
  ], { error: 'The ligand is missing. Accepted: a new ligand, or the code of one that is registered.' }),
  complex: z.strictObject({ code: AgentCode, payload: ComplexPayload }),
  batch: z.strictObject({ lot: Lot, payload: BatchPayload }),
})
export type RegisterAgentInput = z.output<typeof RegisterAgentInput>
export const AgentRegistered = z.object({ code: z.string(), complexId: z.string(), batchId: z.string(), batchVersionId: z.string() })
export const VersionStored = z.object({ versionNo: z.number().int(), id: z.string() })

const reason = lineOf('The reason for the new version', 1000).refine(text => text.length >= 10, { error: 'The reason stays for good. Accepted: at least 10 characters.' })
export const AgentVersionInput = z.discriminatedUnion('part', [
  z.strictObject({ part: z.literal('ligand'), basedOn: z.number().int().min(1), payload: LigandPayload, reason }),
  z.strictObject({ part: z.literal('complex'), basedOn: z.number().int().min(1), payload: ComplexPayload, reason }),
])
export type AgentVersionInput = z.output<typeof AgentVersionInput>

/** What an agent lacks, and who could measure it. */
export const GapDto = z.object({ what: z.string(), who: z.string(), why: z.string() })
export type GapDto = z.output<typeof GapDto>

const Identity = z.object({ id: z.string(), code: z.string(), metal: z.string(), mechanism: z.enum(MECHANISMS), topology: z.enum(TOPOLOGIES) })

/** A value of the list with the state of what stands behind it. */
export const StatedQuantity = z.object({ value: Quantity, state: z.enum(CHECK_STATES), note: z.string().nullable() })
export type StatedQuantity = z.output<typeof StatedQuantity>

export const AgentRowDto = Identity.extend({
  ligand: z.string(), ligandName: z.string(), charge: z.number().int(), batches: z.number().int(), series: z.number().int(), registeredAt: z.string(),
  relaxivity: StatedQuantity.nullable(), relaxivityConditions: z.string().nullable(), pM: StatedQuantity.nullable(), kd: StatedQuantity.nullable(), halfLife: StatedQuantity.nullable(), freeMetal: StatedQuantity.nullable(),
  /** Every value of the agent that counts is signed. */
  signed: z.boolean(),
  decision: z.object({ outcome: z.enum(['advance', 'hold', 'stop']), at: z.string(), by: z.string() }).nullable(),
  /** null for those who see signed values only: what is missing is not theirs to know. */
  gaps: z.array(GapDto).nullable(),
})
export type AgentRowDto = z.output<typeof AgentRowDto>
export const AgentListDto = z.object({ agents: z.array(AgentRowDto), profileName: z.string() })
export type AgentListDto = z.output<typeof AgentListDto>

export const AgentDto = z.object({
  agent: Identity.extend({ payload: ComplexPayload, version: VersionMark, versions: z.array(VersionMark), registeredBy: z.string(), registeredAt: z.string(), signed: z.boolean() }),
  ligand: LigandDto, drawing: StructureDrawing.nullable(), formula: z.string().nullable(),
  batches: z.array(BatchDto), evidence: z.array(EvidenceItemDto),
  /** Why constants of several records may not be held against each other, or what was taken on trust; empty where all is well. */
  constantsDiffer: z.array(z.string()),
  records: z.array(RecordRowDto),
  series: z.array(z.object({ id: z.string(), title: z.string(), kind: z.string(), kindTitle: z.string(), lot: z.string(), at: z.string(), by: z.string(), versionNo: z.number().int().nullable(), outcome: z.enum(['ok', 'refused']).nullable(), checkState: z.enum(CHECK_STATES) })),
  decisions: z.array(z.object({ id: z.string(), outcome: z.enum(['advance', 'hold', 'stop']), reasons: z.string(), by: z.string(), at: z.string() })),
  gaps: z.array(GapDto).nullable(),
})
export type AgentDto = z.output<typeof AgentDto>
