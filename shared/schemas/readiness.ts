import { z } from 'zod'
import { READINESS_ITEMS, type ReadinessItem, type ReadinessKey } from '../readiness'
import { lineOf, lineOrNull, numberWithin, oneOf, wholeWithin } from './accepted'

const KINDS = ['=', '<', '>'] as const

function valueOf({ label, unit, low, high, ask }: ReadinessItem) {
  return z.strictObject({
    kind: oneOf(`${label}: its kind`, KINDS, ['= (measured)', '< (less than)', '> (more than)']),
    value: numberWithin(label, low, high, unit),
    se: numberWithin(`The standard error of ${label}`, 0, high, unit).nullable().default(null),
    conditions: lineOrNull(`The conditions of ${label} (${ask})`, 300),
  }).superRefine((one, context) => {
    if (one.kind !== '=' && one.se !== null) context.addIssue({ code: 'custom', path: ['se'], message: 'A bound has no standard error. Accepted: none, or a measured value.' })
  }).nullable()
}

const valueSchemas = Object.fromEntries(READINESS_ITEMS.map(item => [item.key, valueOf(item)])) as Record<ReadinessKey, ReturnType<typeof valueOf>>

/** Every item is named, so that none is forgotten: null says "not measured". */
export const ReadinessPayload = z.strictObject({ ...valueSchemas, note: lineOrNull('The note', 1000) })
export type ReadinessPayload = z.output<typeof ReadinessPayload>

export const EnterReadiness = z.strictObject({
  /** Version the person saw; 0 = none yet. */
  basedOn: wholeWithin('The version it is based on', 0, 100_000),
  payload: ReadinessPayload,
  reason: lineOf('The reason', 1000).refine(text => text.length >= 10, { error: 'The reason stays for good. Accepted: at least 10 characters.' }),
})
export type EnterReadiness = z.output<typeof EnterReadiness>

const Entry = z.object({ id: z.string(), versionNo: z.number().int(), by: z.string(), at: z.string(), reason: z.string(), payload: ReadinessPayload })

/** The list that counts, with what it lacks; `entry` null = nobody entered one. */
export const ReadinessDto = z.object({
  agent: z.string(),
  entry: Entry.nullable(),
  /** Lots made, newest first. */
  batches: z.array(z.string()),
  gaps: z.array(z.string()),
  findings: z.array(z.object({ isFlag: z.boolean(), sentence: z.string() })),
  history: z.array(Entry.pick({ id: true, versionNo: true, by: true, at: true, reason: true })),
})
export type ReadinessDto = z.output<typeof ReadinessDto>
/** What a decision freezes of it. */
export type FrozenReadiness = Omit<ReadinessDto, 'history'>
