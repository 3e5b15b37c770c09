import { z } from 'zod'
import { CHECK_STATES } from '../checks/transitions'
import { Quantity } from '../evidence/quantity'
import { codeOf, dayOf, fractionOf, lineOf, lineOrNull, numberWithin, oneOf } from './accepted'
import { VersionMark } from './ligand'

export const CONCENTRATION_BASES = ['weighed', 'icp', 'susceptibility'] as const
export const BASIS_WORDS: Readonly<Record<(typeof CONCENTRATION_BASES)[number], string>> = {
  weighed: 'weighed', icp: 'total metal by ICP', susceptibility: 'susceptibility shift',
}

/**
 * Metal of a batch that the ligand does not hold, as a fraction of its total metal. '<': nothing was found, and the value is the detection limit.
 */
export const FreeMetal = z.strictObject({
  kind: oneOf('Free metal', ['=', '<']),
  value_frac: fractionOf('Free metal'),
  se_frac: fractionOf('The standard error of free metal').nullable().default(null),
  detectionLimit_frac: fractionOf('The detection limit of free metal'),
  method: lineOf('The method for free metal', 200),
}).refine(one => one.kind === '<' || one.value_frac >= one.detectionLimit_frac, {
  path: ['value_frac'], error: 'The free metal found is below its own detection limit. Accepted: "less than" the detection limit, or a value above it.',
})
export type FreeMetal = z.output<typeof FreeMetal>

export const TotalMetal = z.strictObject({
  conc_mM: numberWithin('Total metal', 1e-6, 5000, 'mM'),
  se_mM: numberWithin('The standard error of total metal', 0, 5000, 'mM').nullable().default(null),
  method: oneOf('The method for total metal', ['icp', 'susceptibility', 'complexometry']),
})

export const BatchPayload = z.strictObject({
  date: dayOf('The date the batch was made'),
  purity_frac: fractionOf('The purity').nullable().default(null),
  water_frac: fractionOf('The water content').nullable().default(null),
  counterIon: lineOrNull('The counter-ion', 60),
  excessLigand_frac: fractionOf('The excess of free ligand').nullable().default(null),
  isomerRatio: lineOrNull('The isomer ratio', 60),
  hplcPurity_frac: fractionOf('The HPLC purity').nullable().default(null),
  concentrationBasis: oneOf('The concentration basis', CONCENTRATION_BASES, Object.values(BASIS_WORDS)),
  totalMetal: TotalMetal.nullable().default(null),
  freeMetal: FreeMetal.nullable().default(null),
  note: lineOrNull('The note', 1000),
}).refine(one => one.purity_frac === null || one.water_frac === null || one.purity_frac + one.water_frac <= 1.02, {
  path: ['water_frac'], error: 'Purity and water content together exceed 102 %. Accepted: a water content that leaves room for the purity.',
})
export type BatchPayload = z.output<typeof BatchPayload>

export const Lot = codeOf('The lot')

export const CheckState = z.enum(CHECK_STATES)
export type CheckState = z.output<typeof CheckState>

export const BatchVersionDto = z.object({
  id: z.string(), mark: VersionMark, payload: BatchPayload, freeMetal: Quantity.nullable(),
  /** null where there is nothing to sign: a batch without a free-metal value. */
  checkState: CheckState.nullable(), checkSeq: z.number().int(),
})

export const BatchDto = z.object({
  id: z.string(), lot: z.string(),
  /** What may be shown; null where the person asking sees signed values only and none is signed. */
  current: BatchVersionDto.nullable(), versions: z.array(BatchVersionDto),
})
export type BatchDto = z.output<typeof BatchDto>

export const RegisterBatchInput = z.strictObject({ lot: Lot, payload: BatchPayload })
export const BatchVersionInput = z.strictObject({ basedOn: z.number().int().min(1), payload: BatchPayload })
