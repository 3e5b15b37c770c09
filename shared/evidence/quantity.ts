import { z } from 'zod'

/**
 * One number as every DTO carries it. A value is exact ('=') or a bound ('<' less than, '>' more than) and stays so on every screen and in every draw.
 * se: standard error, null = not estimable or not given. interval: 95 %, null likewise. evidenceId answers "where from?"; null for numbers that are
 * not evidence (an input, a model's constant).
 */
export const Quantity = z.object({
  value: z.number(),
  kind: z.enum(['=', '<', '>']),
  se: z.number().nonnegative().nullable(),
  interval: z.tuple([z.number(), z.number()]).nullable(),
  unit: z.string(),
  evidenceId: z.string().nullable(),
})
export type Quantity = z.output<typeof Quantity>

/** A quantity with the name it goes by, for tables of parameters. */
export const NamedQuantity = Quantity.extend({ name: z.string(), label: z.string(), atBound: z.boolean().optional() })
export type NamedQuantity = z.output<typeof NamedQuantity>
