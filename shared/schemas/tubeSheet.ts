import { z } from 'zod'

/** Code of a sheet: letters and digits that are not taken for each other. */
export const SHEET_ALPHABET = '23456789ABCDEFGHJKMNPQRSTVWXYZ'
export const SHEET_CODE = /\bTS-([23456789ABCDEFGHJKMNPQRSTVWXYZ]{6})\b/i

const line = (most: number) => z.string().trim().max(most)

/** A tube as it is made: what is in it, and how well that is known. */
export const SheetTube = z.strictObject({
  tubeNo: z.number().int().min(1).max(200),
  label: line(120).min(1),
  role: z.enum(['sample', 'blank', 'reference']),
  agent: line(60).nullable(),
  lot: line(60).nullable(),
  conc_mM: z.number().min(0).max(5000),
  concSe_mM: z.number().min(0).max(5000).nullable(),
  /** What to pipette, null where it was not planned here. */
  stock_uL: z.number().min(0).nullable(),
  diluent_uL: z.number().min(0).nullable(),
})
export type SheetTube = z.output<typeof SheetTube>

/** What goes to the scanner and is recognised when the file comes back. */
export const TubeSheet = z.strictObject({
  code: z.string(),
  kind: line(60),
  title: line(200),
  conditions: z.record(z.string().max(60), z.union([z.number(), z.string().max(500), z.null()])),
  tubes: z.array(SheetTube).min(1).max(200),
  /** Proposed abscissa of the acquisition, stored unit of the kind's x column. */
  values: z.array(z.number()).max(200),
  columns: z.number().int().min(1).max(24),
})
export type TubeSheet = z.output<typeof TubeSheet>

export const SaveTubeSheet = TubeSheet.omit({ code: true })
export type SaveTubeSheet = z.output<typeof SaveTubeSheet>

export const TubeSheetDto = TubeSheet.extend({
  kindTitle: z.string(), createdBy: z.string(), createdAt: z.string(),
  /** Head of the abscissa with the unit it is shown in, and the values in that unit. */
  x: z.object({ label: z.string(), unit: z.string(), shown: z.array(z.number()) }),
  /** Conditions in words. */
  shownConditions: z.array(z.object({ label: z.string(), shown: z.string() })),
})
export type TubeSheetDto = z.output<typeof TubeSheetDto>

export const TubeSheetList = z.object({ sheets: z.array(z.object({ code: z.string(), title: z.string(), kindTitle: z.string(), tubes: z.number(), createdBy: z.string(), createdAt: z.string() })) })
export type TubeSheetList = z.output<typeof TubeSheetList>

export const SheetParams = z.object({ programme: z.string(), code: z.string().regex(SHEET_CODE, 'A sheet has a code such as TS-7K3M9Q.').transform(code => code.toUpperCase()) })
export const SheetFileQuery = z.object({ form: z.enum(['csv', 'xlsx']).default('csv') })

/** Expected relaxation times of the tubes, from which an acquisition is proposed. */
export const ProposeQuery = z.object({ kind: z.string().max(60), shortest_s: z.coerce.number().positive().max(100), longest_s: z.coerce.number().positive().max(100), tr_s: z.coerce.number().positive().max(100).optional() })
export const ProposedDto = z.object({ label: z.string(), unit: z.string(), shown: z.array(z.number()), values: z.array(z.number()), why: z.string() }).nullable()
export type ProposedDto = z.output<typeof ProposedDto>
