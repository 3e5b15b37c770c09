import { z } from 'zod'
import { CHECK_STATES } from '../checks/transitions'
import { NamedQuantity } from '../evidence/quantity'

const Estimate = z.object({ value: z.number(), se: z.number().nullable(), interval: z.tuple([z.number(), z.number()]).nullable() })

/** Slopes of one agent that were measured alike, and whether they are one slope. */
export const RelaxivityGroup = z.object({
  quantity: z.string(), label: z.string(), conditions: z.string(),
  series: z.array(z.object({
    seriesId: z.string(), title: z.string(), kindTitle: z.string(), lot: z.string(), versionNo: z.number(), state: z.enum(CHECK_STATES), headline: NamedQuantity, tubes: z.number(),
    /** Concentrations that the line rests on. */
    range_mM: z.tuple([z.number(), z.number()]),
  })),
  /** Pooled over preparations with the variance between them; null with one series. */
  pooled: Estimate.extend({ preparations: z.number(), betweenSd: z.number().nullable(), homogeneityP: z.number().nullable() }).nullable(),
  /** Whether the relaxivities are one, errors of the stocks counted. */
  agree: z.object({ f: z.number(), df1: z.number(), df2: z.number().nullable(), p: z.number(), stocks: z.number() }).nullable(),
  /** Whether the lines as measured are parallel: analysis of covariance, which knows nothing of the stocks. */
  parallel: z.object({ f: z.number(), df1: z.number(), df2: z.number(), p: z.number() }).nullable(),
})
export type RelaxivityGroup = z.output<typeof RelaxivityGroup>

export const RelaxivityRatio = Estimate.extend({
  lot: z.string(), conditions: z.string(), r1SeriesId: z.string(), r2SeriesId: z.string(), tubes: z.number(), correlation: z.number().nullable(),
  /** bootstrap: residuals of the same tubes drawn in pairs; oneStock: other tubes of one stock, whose error cancels; apart: nothing is shared, all errors count. */
  method: z.enum(['bootstrap', 'oneStock', 'apart']),
})
export type RelaxivityRatio = z.output<typeof RelaxivityRatio>

export const AgentRelaxivityDto = z.object({ groups: z.array(RelaxivityGroup), ratios: z.array(RelaxivityRatio) })
export type AgentRelaxivityDto = z.output<typeof AgentRelaxivityDto>
