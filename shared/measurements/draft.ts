import { z } from 'zod'
import { UPLOAD_LIMITS } from './tabular/limits'

const text = (length: number) => z.string().trim().max(length)
const stemAndUnit = { stem: text(40).nullable(), unit: text(40).nullable() }

/** What a person chose about one tube, by the tube's key; what is left out stays as the file has it. */
export const TubeDraft = z.strictObject({
  key: z.string().max(400),
  label: text(UPLOAD_LIMITS.labelLength).regex(/^[^\p{Cc}\p{Bidi_Control}]*$/u, 'The name holds marks that are not seen.').optional(),
  complexCode: text(60).nullable().optional(),
  lot: text(60).nullable().optional(),
  conc_mM: z.number().nullable().optional(),
  concSe_mM: z.number().nullable().optional(),
  /** 'aside': the tube stays in the file and is not stored as part of a series. */
  role: z.enum(['sample', 'blank', 'reference', 'aside']).optional(),
})
export type TubeDraft = z.output<typeof TubeDraft>

/**
 * Everything a person chose about an upload; all of it optional. A choice always wins over what was found or guessed.
 * conditions: by key, in stored units; null = taken back, so that a value found in the file does not count either.
 */
export const UploadDraft = z.strictObject({
  kind: text(60).optional(),
  /** Sheet of a workbook, by its name. */
  sheet: z.string().max(300).optional(),
  delimiter: z.enum([',', ';', '\t']).optional(),
  decimal: z.enum(['point', 'comma']).optional(),
  /** Row of the file, from 1; null = the table has no header row. */
  headerRow: z.number().int().min(1).max(UPLOAD_LIMITS.rows).nullable().optional(),
  layout: z.enum(['long', 'columnPerTube', 'rowPerTube']).optional(),
  /** index from 0. stem null = the column is not read; unit null = as the header has it. */
  columns: z.array(z.strictObject({ index: z.number().int().min(0).max(UPLOAD_LIMITS.columns), ...stemAndUnit })).max(UPLOAD_LIMITS.columns).optional(),
  /** Units that no column head carries, by stem: of times written across the header row, of a row of concentrations. */
  units: z.record(z.string().max(40), text(40).nullable()).optional(),
  conditions: z.record(z.string().max(60), z.union([z.number(), z.string().max(500), z.null()])).optional(),
  /** Code of the tube sheet that fills in what the file does not say; null = none, though the file names one. */
  tubeSheet: z.string().max(20).nullable().optional(),
  /** Agent and batch of every tube for which neither the file nor the person names one. */
  complexCode: text(60).nullable().optional(),
  lot: text(60).nullable().optional(),
  tubes: z.array(TubeDraft).max(UPLOAD_LIMITS.tubes).optional(),
})
export type UploadDraft = z.output<typeof UploadDraft>
