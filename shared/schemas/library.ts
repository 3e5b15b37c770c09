import { z } from 'zod'
import { oneOf } from './accepted'
import { AgentCode, MECHANISMS } from './agent'
import { LigandCode } from './ligand'
import { MetalSymbol } from './metal'

/** What is copied from the starter library, and where to: the ligand alone, a new agent with it, or records onto an agent that is registered. */
export const LibraryCopyInput = z.strictObject({
  ligand: z.string({ error: 'The ligand of the library is missing.' }).max(80),
  into: z.discriminatedUnion('kind', [
    z.strictObject({ kind: z.literal('ligand'), ligandCode: LigandCode }),
    z.strictObject({ kind: z.literal('newAgent'), ligandCode: LigandCode, agentCode: AgentCode, metal: MetalSymbol, mechanism: oneOf('The mechanism', MECHANISMS) }),
    z.strictObject({ kind: z.literal('agent'), agentCode: AgentCode }),
  ], { error: 'Say what the copy is for. Accepted: the ligand alone, a new agent, or an agent that is registered.' }),
  /** Keys of the records to copy. */
  records: z.array(z.string().max(80)).max(30, { error: 'Too many records at once. Accepted: at most 30.' }),
})
export type LibraryCopyInput = z.output<typeof LibraryCopyInput>
export const LibraryCopied = z.object({ ligand: z.string(), agent: z.string().nullable(), records: z.array(z.string()) })
export type LibraryCopied = z.output<typeof LibraryCopied>
