import { z } from 'zod'
import { UploadDraft } from '../measurements/draft'
import { FigureSpec } from './figure'

export const UploadParams = z.object({ programme: z.string(), id: z.uuid() })

/** The same bytes, uploaded before: pointed out, not barred. */
const SeenBefore = z.object({ at: z.string(), personName: z.string(), fileName: z.string(), series: z.array(z.object({ id: z.string(), title: z.string(), agentCode: z.string() })) })

export const StagedUploadDto = z.object({
  id: z.string(),
  fileName: z.string(),
  bytes: z.number(),
  sha256: z.string(),
  state: z.enum(['staged', 'confirmed', 'discarded', 'expired']),
  stagedAt: z.string(),
  expiresAt: z.string(),
  draft: UploadDraft,
  seenBefore: z.array(SeenBefore),
})
export type StagedUploadDto = z.output<typeof StagedUploadDto>

export const PreviewRequest = z.strictObject({ draft: UploadDraft })
export const ConfirmRequest = z.strictObject({ draft: UploadDraft })

export const UploadProblemDto = z.object({
  id: z.string(), row: z.number().nullable(), column: z.number().nullable(), field: z.string().nullable(), message: z.string(), accepted: z.string(), severity: z.enum(['blocks', 'asks']),
  /** Sheet of a workbook that row and column belong to. */
  sheet: z.string().optional(),
})
export type UploadProblemDto = z.output<typeof UploadProblemDto>

const How = z.enum(['from the header', 'chosen', 'guessed'])

export const PreviewDto = z.object({
  upload: StagedUploadDto,
  kind: z.string(),
  /** First rows of the file, with the file's own row numbers. */
  preview: z.array(z.object({ row: z.number(), cells: z.array(z.string()) })),
  rowCount: z.number(),
  columnCount: z.number(),
  metadata: z.array(z.object({ row: z.number(), key: z.string().nullable(), value: z.string(), place: z.string() })),
  /** Code of the tube sheet that the file names. */
  tubeSheet: z.string().nullable(),
  workbook: z.object({ sheet: z.string(), sheets: z.array(z.string()) }).nullable(),
  encoding: z.string().nullable(),
  delimiter: z.string().nullable(),
  decimal: z.enum(['point', 'comma']),
  headerRow: z.number().nullable(),
  layout: z.enum(['long', 'columnPerTube', 'rowPerTube']),
  how: z.object({ delimiter: How, decimal: How, headerRow: How, layout: How }),
  columns: z.array(z.object({
    index: z.number(), letter: z.string(), header: z.string(), stem: z.string().nullable(), label: z.string(), unit: z.string().nullable(), units: z.array(z.string()), how: How,
  })),
  looseUnits: z.array(z.object({ stem: z.string(), label: z.string(), unit: z.string().nullable(), units: z.array(z.string()), how: How, place: z.string() })),
  found: z.array(z.object({ key: z.string(), value: z.union([z.number(), z.string()]), place: z.string(), text: z.string() })),
  conditions: z.record(z.string(), z.union([z.number(), z.string(), z.null()])),
  tubes: z.array(z.object({
    tubeNo: z.number(), key: z.string(), label: z.string(), role: z.enum(['sample', 'blank', 'reference', 'aside']), agent: z.string().nullable(), batch: z.string().nullable(),
    conc_mM: z.number().nullable(), concSe_mM: z.number().nullable(), place: z.string(), points: z.number(),
  })),
  series: z.array(z.object({ complexCode: z.string().nullable(), lot: z.string().nullable(), tubes: z.number(), title: z.string() })),
  problems: z.array(UploadProblemDto),
  canStore: z.boolean(),
  /** Points as read, joined; not a fit. */
  quickLook: FigureSpec.nullable(),
  /** Agents and batches that tubes can be assigned to. */
  targets: z.array(z.object({ complexCode: z.string(), lots: z.array(z.string()) })),
})
export type PreviewDto = z.output<typeof PreviewDto>

export const ConfirmedDto = z.object({
  uploadId: z.string(),
  series: z.array(z.object({ id: z.string(), title: z.string(), agentCode: z.string(), lot: z.string(), jobId: z.string() })),
})
export type ConfirmedDto = z.output<typeof ConfirmedDto>
