import { z } from 'zod'
import { Donor, TOPOLOGIES } from './ligand'

/** A structure laid out for drawing: positions in bond lengths, y downwards. */
export const StructureDrawing = z.object({
  width: z.number(), height: z.number(),
  atoms: z.array(z.object({ x: z.number(), y: z.number(), symbol: z.string(), hydrogens: z.number().int(), charge: z.number().int(), isShown: z.boolean(), hydrogensLeft: z.boolean() })),
  bonds: z.array(z.object({ from: z.number().int(), to: z.number().int(), order: z.number().int(), wedge: z.enum(['none', 'up', 'down']), inner: z.enum(['left', 'right', 'middle']) })),
  /** Where the metal sits, in the middle of a ring of donors; null for open chains. */
  metalAt: z.object({ x: z.number(), y: z.number() }).nullable(),
})
export type StructureDrawing = z.output<typeof StructureDrawing>

/** What a SMILES says of a ligand: proposals, to be looked at and changed by the person who registers it. */
export const StructureDto = z.object({
  formula: z.string(),
  /** As drawn. */
  molarMass_g_per_mol: z.number(),
  chargeAsDrawn: z.number().int(),
  /** With the protons of its acid groups gone, as it binds a metal. */
  deprotonatedCharge: z.number().int(), deprotonatedMass_g_per_mol: z.number(),
  donors: z.array(Donor), denticity: z.number().int(), topology: z.enum(TOPOLOGIES), topologyReason: z.string(),
  /** Size of the ring that holds the donors; null for open chains. */
  ringSize: z.number().int().nullable(),
  drawing: StructureDrawing,
})
export type StructureDto = z.output<typeof StructureDto>
export const StructureQuery = z.object({ smiles: z.string().trim().min(1, { error: 'The structure is empty. Accepted: a SMILES text.' }).max(1000, { error: 'The structure is too long. Accepted: at most 1000 characters.' }) })
