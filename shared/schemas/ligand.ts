import { z } from 'zod'
import { codeOf, lineOf, lineOrNull, numberWithin, oneOf, wholeWithin } from './accepted'

/** Groups whose atom binds the metal. */
export const DONOR_KINDS = ['amine N', 'pyridine N', 'carboxylate O', 'phosphonate O', 'phosphinate O', 'amide O', 'hydroxyl O', 'phenolate O', 'other'] as const
export const TOPOLOGIES = ['ring', 'openChain'] as const
export const TOPOLOGY_WORDS: Readonly<Record<(typeof TOPOLOGIES)[number], string>> = { ring: 'ring', openChain: 'open chain' }

export const Donor = z.strictObject({
  element: oneOf('The donor element', ['N', 'O', 'S', 'P']),
  kind: oneOf('The donor group', DONOR_KINDS),
  count: wholeWithin('The number of donors', 1, 12),
})
export type Donor = z.output<typeof Donor>

/** Stepwise log protonation constants, most basic site first. */
export const ProtonationStep = z.strictObject({
  value: numberWithin('A protonation constant (log K)', -2, 15),
  se: numberWithin('The standard error of a protonation constant', 0, 5).nullable().default(null),
})

export const Protonation = z.strictObject({
  stepwiseLogK: z.array(ProtonationStep).min(1, { error: 'No protonation constant is given. Accepted: 1 to 12, most basic first.' }).max(12, { error: 'Too many protonation constants. Accepted: 1 to 12.' }),
  temperature_K: numberWithin('The temperature', 250, 400, 'K'),
  ionicStrength_M: numberWithin('The ionic strength', 0, 6, 'M'),
  medium: lineOf('The electrolyte', 60),
  source: lineOf('The source of the protonation constants', 500),
})
export type Protonation = z.output<typeof Protonation>

export const LigandPayload = z.strictObject({
  name: lineOf('The name of the ligand', 200),
  smiles: lineOf('The structure (SMILES)', 1000),
  donors: z.array(Donor).max(12, { error: 'Too many donor groups. Accepted: at most 12.' }),
  denticity: wholeWithin('The denticity', 1, 16),
  topology: oneOf('Ring or open chain', TOPOLOGIES, Object.values(TOPOLOGY_WORDS)),
  /** Net charge with every acid proton gone. */
  charge: wholeWithin('The net charge', -12, 6),
  protonation: Protonation.nullable().default(null),
  note: lineOrNull('The note', 1000),
})
export type LigandPayload = z.output<typeof LigandPayload>

export const LigandCode = codeOf('The code of the ligand')

export const VersionMark = z.object({ versionNo: z.number().int(), at: z.string(), by: z.string() })
export type VersionMark = z.output<typeof VersionMark>

export const LigandDto = z.object({ id: z.string(), code: z.string(), payload: LigandPayload, version: VersionMark, versions: z.array(VersionMark) })
export type LigandDto = z.output<typeof LigandDto>

export const LigandListDto = z.object({ ligands: z.array(z.object({ code: z.string(), name: z.string(), topology: z.enum(TOPOLOGIES), charge: z.number(), denticity: z.number(), smiles: z.string() })) })
export type LigandListDto = z.output<typeof LigandListDto>
