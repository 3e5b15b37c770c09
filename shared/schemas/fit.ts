import { z } from 'zod'
import { CHECK_STATES } from '../checks/transitions'
import { EvidenceItemDto } from '../evidence/item'
import { NamedQuantity } from '../evidence/quantity'
import { FigureSpec, SmallFigureSpec } from './figure'

/** Shortest reason for leaving something out: the words stay with the fit for good. */
export const MIN_REASON_LENGTH = 10

const reason = z.string().trim().min(MIN_REASON_LENGTH, `A reason stays with the fit for good; at least ${MIN_REASON_LENGTH} characters.`).max(1000, 'A reason has at most 1000 characters.')
const place = { tubeNo: z.number().int().min(1), pointIndex: z.number().int().min(0).nullable() }

export const FitParams = z.object({ programme: z.string(), id: z.uuid(), version: z.coerce.number().int().min(1) })
export const TubeFigureParams = FitParams.extend({ tube: z.coerce.number().int().min(1) })
/** ?versions=1,2 */
export const CompareQuery = z.object({
  versions: z.string().regex(/^[1-9]\d{0,8},[1-9]\d{0,8}$/, 'Name two versions, such as versions=1,2.').transform(text => text.split(',').map(Number) as [number, number]),
})

/** Leaves out a point of a tube, or with pointIndex null the whole tube. */
export const ExclusionRequest = z.strictObject({ ...place, reason })
export type ExclusionRequest = z.output<typeof ExclusionRequest>

/**
 * Asks for the next version of a fit. What the parent leaves out stays left out unless putBack names it; `exclusions` are the new ones.
 * parentVersion null = the newest version, or none when there is none yet.
 */
export const FitRequest = z.strictObject({
  modelId: z.string().max(60).optional(),
  options: z.record(z.string().max(60), z.union([z.number(), z.string().max(200), z.boolean()])).default({}),
  exclusions: z.array(ExclusionRequest).max(500).default([]),
  putBack: z.array(z.strictObject(place)).max(500).default([]),
  parentVersion: z.number().int().min(1).nullable().default(null),
})
export type FitRequest = z.output<typeof FitRequest>

export const FitRequested = z.object({ jobId: z.string(), seriesId: z.string() })
export type FitRequested = z.output<typeof FitRequested>

/** A choice of how to fit beside the model, as forms need it. */
export const FitOptionDto = z.object({
  key: z.string(), label: z.string(), type: z.enum(['choice', 'integer', 'number']), choices: z.array(z.object({ value: z.string(), label: z.string() })), min: z.number().nullable(), max: z.number().nullable(),
  unit: z.string().nullable(), standard: z.union([z.string(), z.number()]), help: z.string(),
  /** Models that it belongs to; null = all. */
  models: z.array(z.string()).nullable(),
})
export type FitOptionDto = z.output<typeof FitOptionDto>

/** Correlations of fitted parameters, rows and columns in the order of the names. */
export const CorrelationDto = z.object({ names: z.array(z.string()), labels: z.array(z.string()), matrix: z.array(z.array(z.number())) })
export type CorrelationDto = z.output<typeof CorrelationDto>

export const FlagDto = z.object({ id: z.string(), title: z.string(), sentence: z.string(), tubeNo: z.number().nullable() })
export type FlagDto = z.output<typeof FlagDto>

export const TubeDto = z.object({
  tubeNo: z.number(),
  label: z.string(),
  role: z.enum(['sample', 'blank', 'reference']),
  conc_mM: z.number(),
  excluded: z.string().nullable(),
  headline: NamedQuantity.nullable(),
  parameters: z.array(NamedQuantity),
  refusal: z.object({ reason: z.string(), message: z.string(), accepted: z.string() }).nullable(),
  points: z.array(z.object({
    index: z.number(), x: z.number(), y: z.number(), fitted: z.number().nullable(), residual: z.number().nullable(), studentised: z.number().nullable(), excluded: z.string().nullable(),
  })),
  flags: z.array(FlagDto),
  passed: z.array(z.string()),
  statistics: z.object({
    rss: z.number(), dof: z.number(), reducedChi2: z.number().nullable(), aicc: z.number().nullable(), r2: z.number().nullable(), condition: z.number().nullable(),
    evaluations: z.number(), stop: z.string(), sigma: z.string(),
  }).nullable(),
  secondOpinion: z.object({ rss: z.number().nullable(), relativeDifference: z.number().nullable(), lower: z.boolean(), note: z.string() }).nullable(),
  /** Both absent in fits of engine 1. */
  correlation: CorrelationDto.nullish(),
  intervalMethod: z.string().optional(),
  /** Place in the file: column, rows. */
  place: z.string(),
  /** The large figure is asked for tube by tube. */
  small: SmallFigureSpec,
})
export type TubeDto = z.output<typeof TubeDto>

export const SeriesResultDto = z.object({
  headline: NamedQuantity,
  parameters: z.array(NamedQuantity),
  points: z.array(z.object({
    tubeNo: z.number(), label: z.string(), x: z.number(), y: z.number(), ySe: z.number().nullable(), fitted: z.number(), studentised: z.number().nullable(), cook: z.number().nullable(),
    leaveOneOut: z.number().nullable(), excluded: z.string().nullable(),
  })),
  statistics: z.array(z.object({ label: z.string(), value: z.number().nullable(), text: z.string() })),
  correlation: CorrelationDto.nullish(),
})

export const FitCheckDto = z.object({ state: z.enum(CHECK_STATES), seq: z.number(), personName: z.string().nullable(), since: z.string().nullable() })

export const FitVersionDto = z.object({
  id: z.string(),
  versionNo: z.number(),
  parentVersion: z.number().nullable(),
  modelId: z.string(),
  modelTitle: z.string(),
  outcome: z.enum(['ok', 'refused']),
  leftOut: z.number(),
  requestedBy: z.string(),
  createdAt: z.string(),
  check: FitCheckDto,
})
export type FitVersionDto = z.output<typeof FitVersionDto>

export const EngineDto = z.object({ lanthorn: z.string(), node: z.string(), v8: z.string() })

/** One version of a fit with everything to look at: curves, slope, flags, what was left out, and how to repeat it. */
export const FitDto = FitVersionDto.extend({
  seriesId: z.string(),
  modelVersion: z.number(),
  options: z.record(z.string(), z.union([z.number(), z.string(), z.boolean()])),
  seed: z.string(),
  inputHash: z.string(),
  resultHash: z.string(),
  engine: EngineDto,
  exclusions: z.array(z.object({ tubeNo: z.number(), pointIndex: z.number().nullable(), reason: z.string(), personName: z.string(), at: z.string() })),
  refusal: z.object({ reason: z.string(), message: z.string(), accepted: z.string() }).nullable(),
  series: SeriesResultDto.nullable(),
  seriesFigure: FigureSpec.nullable(),
  tubes: z.array(TubeDto),
  flags: z.array(FlagDto),
  passed: z.array(z.string()),
  /** Ready to paste into a methods section; null where the fit was refused. */
  method: z.string().nullable(),
  evidence: z.array(EvidenceItemDto),
})
export type FitDto = z.output<typeof FitDto>

/** What came of computing a stored fit again. relativeDifference: largest over all numbers; null where the texts differ in more than numbers. */
export const RepeatDto = z.object({
  same: z.boolean(),
  versionNo: z.number(),
  storedHash: z.string(),
  repeatedHash: z.string(),
  differences: z.array(z.object({ path: z.string(), stored: z.string(), repeated: z.string() })),
  differenceCount: z.number(),
  relativeDifference: z.number().nullable(),
  storedEngine: EngineDto,
  engine: EngineDto,
  sameEngine: z.boolean(),
  /** Model of the stored fit against the one that is here now. */
  modelVersion: z.object({ stored: z.number(), now: z.number() }),
})
export type RepeatDto = z.output<typeof RepeatDto>

export const ComparedVersion = FitVersionDto.extend({
  headline: NamedQuantity.nullable(),
  parameters: z.array(NamedQuantity),
  statistics: z.array(z.object({ label: z.string(), value: z.number().nullable(), text: z.string() })),
  rss: z.number().nullable(),
  dof: z.number().nullable(),
  aicc: z.number().nullable(),
  flags: z.number(),
  /** Options that are not the standard, in words. */
  options: z.array(z.string()),
  /** Akaike weight between the two; null where AICc cannot judge. */
  weight: z.number().nullable(),
})

/** Two versions side by side. Where they rest on different points, AICc and F cannot judge between them, and `note` says so. */
export const CompareDto = z.object({
  a: ComparedVersion,
  b: ComparedVersion,
  samePoints: z.boolean(),
  /** AICc of b minus that of a; below 0 speaks for b. */
  aiccDifference: z.number().nullable(),
  fTest: z.object({ f: z.number(), df1: z.number(), df2: z.number(), p: z.number(), simpler: z.enum(['a', 'b']) }).nullable(),
  /** Difference of the headline, b minus a, in standard errors of a. */
  shiftInSe: z.number().nullable(),
  tubes: z.array(z.object({ tubeNo: z.number(), label: z.string(), a: NamedQuantity.nullable(), b: NamedQuantity.nullable(), aOut: z.boolean(), bOut: z.boolean(),
    /** Both curves over the points, where either has one. */
    figure: FigureSpec.nullable(),
  })),
  note: z.string(),
})
export type CompareDto = z.output<typeof CompareDto>
