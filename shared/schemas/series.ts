import { z } from 'zod'
import { Quantity } from '../evidence/quantity'
import { FitOptionDto, FitVersionDto, MIN_REASON_LENGTH } from './fit'

export const SERIES_STATES = ['fitting', 'refused', 'draft', 'waiting', 'firstSigned', 'returned', 'recalled', 'signed', 'withdrawn'] as const

export const SeriesParams = z.object({ programme: z.string(), id: z.uuid() })
export const SeriesQuery = z.object({
  agent: z.string().max(60).optional(),
  kind: z.string().max(60).optional(),
  state: z.enum(SERIES_STATES).optional(),
  /** From the answer before: where its list ended. */
  before: z.string().max(80).optional(),
  limit: z.coerce.number().int().min(1).max(200).default(50),
})
export type SeriesQuery = z.output<typeof SeriesQuery>

/** The number a list shows, with the name it goes by. */
export const HeadlineDto = z.object({ quantity: z.string(), value: Quantity, signed: z.boolean(), versionNo: z.number() })

export const SeriesListItem = z.object({
  id: z.string(),
  kind: z.string(),
  kindTitle: z.string(),
  title: z.string(),
  agentCode: z.string(),
  lot: z.string(),
  fileName: z.string().nullable(),
  recordedBy: z.string(),
  recordedAt: z.string(),
  tubes: z.number(),
  versionNo: z.number().nullable(),
  state: z.enum(SERIES_STATES),
  headline: HeadlineDto.nullable(),
})
export type SeriesListItem = z.output<typeof SeriesListItem>

export const SeriesListDto = z.object({ series: z.array(SeriesListItem), next: z.string().nullable(), kinds: z.array(z.object({ kind: z.string(), title: z.string() })), agents: z.array(z.string()) })
export type SeriesListDto = z.output<typeof SeriesListDto>

const Condition = z.object({
  key: z.string(), label: z.string(), value: z.union([z.number(), z.string()]).nullable(), unit: z.string().nullable(),
  /** As the screen writes it, in the unit that the trade uses. */
  shown: z.string(),
})

export const SeriesDto = z.object({
  id: z.string(),
  kind: z.string(),
  kindTitle: z.string(),
  title: z.string(),
  /** Heading and note of the series' result. */
  words: z.object({ title: z.string(), note: z.string() }),
  agentCode: z.string(),
  lot: z.string(),
  mechanism: z.string().nullable(),
  topology: z.string().nullable(),
  conditions: z.array(Condition),
  models: z.array(z.object({ id: z.string(), version: z.number(), title: z.string() })),
  defaultModel: z.string(),
  options: z.array(FitOptionDto),
  tubes: z.array(z.object({ tubeNo: z.number(), label: z.string(), role: z.enum(['sample', 'blank', 'reference']), conc_mM: z.number(), concSe_mM: z.number().nullable(), points: z.number(), place: z.string() })),
  inputHash: z.string(),
  /** null where the person may not see files. */
  file: z.object({ uploadId: z.string(), name: z.string(), bytes: z.number(), sha256: z.string(), uploadedBy: z.string(), uploadedAt: z.string() }).nullable(),
  recordedBy: z.string(),
  recordedAt: z.string(),
  events: z.array(z.object({ event: z.enum(['recorded', 'withdrawn', 'conditionsCorrected']), reason: z.string(), personName: z.string(), at: z.string() })),
  replaces: z.string().nullable(),
  replacedBy: z.string().nullable(),
  isWithdrawn: z.boolean(),
  versions: z.array(FitVersionDto),
})
export type SeriesDto = z.output<typeof SeriesDto>

const reason = z.string().trim().min(MIN_REASON_LENGTH, `A reason stays with the series for good; at least ${MIN_REASON_LENGTH} characters.`).max(1000, 'A reason has at most 1000 characters.')

export const WithdrawRequest = z.strictObject({ reason })
export type WithdrawRequest = z.output<typeof WithdrawRequest>
export const SeriesWithdrawn = z.object({ id: z.string(), at: z.string() })

/** What was wrong: conditions by key in stored units, concentrations by tube. What is left out stays as it was. */
export const CorrectRequest = z.strictObject({
  conditions: z.record(z.string().max(60), z.union([z.number(), z.string().max(500), z.null()])).default({}),
  tubes: z.array(z.strictObject({ tubeNo: z.number().int().min(1), conc_mM: z.number().min(0), concSe_mM: z.number().min(0).nullable() })).max(500).default([]),
  reason,
})
export type CorrectRequest = z.output<typeof CorrectRequest>
export const SeriesCorrected = z.object({ id: z.string(), replaces: z.string(), jobId: z.string() })
