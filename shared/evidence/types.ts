import { z } from 'zod'
import { Quantity } from './quantity'

/** Errors that several numbers share (a stock's assay): drawn once per group, and they cancel in ratios inside one group. */
export const CovarianceGroup = z.object({ id: z.string(), scaleFraction: z.number().nonnegative() })

/**
 * What a fit or a typed record says about an agent. Map, agent page, decisions and exports read these and never a fit.
 * conditions: stored units, names with suffix (b0_T, temperature_K, pH, medium); what does not apply is absent.
 */
export const EvidenceDraft = z.object({
  quantity: z.string(),
  value: Quantity.omit({ evidenceId: true }),
  conditions: z.record(z.string(), z.union([z.number(), z.string(), z.null()])),
  covarianceGroup: CovarianceGroup.nullable(),
  /** Free facts that readers of this quantity need (metal of a constant, pH range of a rate law, n of preparations). */
  detail: z.record(z.string(), z.union([z.number(), z.string(), z.boolean(), z.null(), z.array(z.number())])),
})
export type EvidenceDraft = z.output<typeof EvidenceDraft>
