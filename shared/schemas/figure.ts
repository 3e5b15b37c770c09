import { z } from 'zod'

/**
 * A figure as plain data. Whoever knows the science (a measurement kind, a page of the map) says what to draw;
 * `FigurePlot` knows how. Texts may carry notation such as `R_1, s^-1` or `mM^{-1}` (see shared/notation.ts).
 */

/** Names of colour tokens that a layer may use; never a hex value. */
export const FIGURE_TOKENS = ['ink', 'ink-2', 'ink-3', 'fault', 't1', 't2', 'cest', 's1', 's2', 's3', 's4', 's5', 's6'] as const
export const FIGURE_DASHES = ['solid', 'dashed', 'dotted', 'dashdot'] as const

const number = z.number()
const token = z.enum(FIGURE_TOKENS)
const name = z.string()

export const FigureAxis = z.object({
  label: z.string(),
  /** Shown after a comma; null for a pure number. */
  unit: z.string().nullable(),
  scale: z.enum(['linear', 'log']),
  /** Fixed ends, low then high. Left out: taken from the layers. Points beyond it become arrows at the edge. */
  domain: z.tuple([number, number]).optional(),
  /** Offsets in ppm run from right to left. */
  reversed: z.boolean().optional(),
})

const point = z.object({ x: number, y: number, id: z.string().optional(), label: z.string().optional() })

const PointsLayer = z.object({
  type: z.literal('points'), name, token,
  /** The second condition of a figure is drawn open. */
  open: z.boolean().optional(),
  /** Numbers of another origin, such as literature, are drawn as squares. */
  square: z.boolean().optional(),
  /** Joined by a thin line: "points as read, joined; not a fit". */
  joined: z.boolean().optional(),
  points: z.array(point),
})
const LineLayer = z.object({
  type: z.literal('line'), name, token,
  dash: z.enum(FIGURE_DASHES).optional(),
  /** Writes the name at the end of the line; on unless false. */
  labelled: z.boolean().optional(),
  points: z.array(z.object({ x: number, y: number })),
})
const BandLayer = z.object({ type: z.literal('band'), name, token, points: z.array(z.object({ x: number, low: number, high: number })) })
const BarsLayer = z.object({ type: z.literal('bars'), name, token, points: z.array(point) })
/** `low` and `high` are ends on the y axis, not lengths; `xLow` and `xHigh` likewise across. */
const ErrorBarsLayer = z.object({
  type: z.literal('errorBars'), name, token,
  points: z.array(z.object({ x: number, y: number, low: number, high: number, xLow: number.optional(), xHigh: number.optional() })),
})
/** Points left out, kept at their true place. */
const CrossLayer = z.object({ type: z.literal('cross'), name, token: token.optional(), points: z.array(point) })
/** A limit or a mark along one axis. */
const RuleLayer = z.object({ type: z.literal('rule'), name, token: token.optional(), axis: z.enum(['x', 'y']), at: number, dash: z.enum(FIGURE_DASHES).optional() })
/** A few words inside the plot, such as the slope with its error. */
const NoteLayer = z.object({
  type: z.literal('note'), name, token: token.optional(),
  corner: z.enum(['topLeft', 'topRight', 'bottomLeft', 'bottomRight']), lines: z.array(z.string()),
})

export const FigureLayer = z.discriminatedUnion('type', [
  PointsLayer, LineLayer, BandLayer, BarsLayer, ErrorBarsLayer, CrossLayer, RuleLayer, NoteLayer,
])

/** Residuals beneath the plot, on the same x axis. */
export const FigureStrip = z.object({
  label: z.string(),
  token: token.optional(),
  /** Half height; residuals in units of their SE run to 3 by default. */
  limit: number.optional(),
  points: z.array(z.object({ x: number, y: number, out: z.boolean().optional() })),
})

export const FigureTable = z.object({
  columns: z.array(z.object({ key: z.string(), label: z.string(), unit: z.string().nullable(), numeric: z.boolean() })),
  rows: z.array(z.record(z.string(), z.union([z.string(), number, z.null()]))),
})

export const FigureSpec = z.object({
  id: z.string(),
  title: z.string(),
  /** What a person who cannot see the figure needs to know of it, in a sentence or two. */
  text: z.string(),
  /** Said beneath, such as "Bars are ±1 SE; band 95 %." */
  caption: z.string().optional(),
  x: FigureAxis,
  y: FigureAxis,
  layers: z.array(FigureLayer),
  strip: FigureStrip.optional(),
  /** The same numbers as a table. */
  table: FigureTable.optional(),
})

/** One tube of a check: small, without tick labels. */
export const SmallFigureSpec = z.object({
  id: z.string(),
  title: z.string(),
  value: z.string().nullable(),
  plusMinus: z.string().nullable(),
  text: z.string(),
  x: z.object({ scale: z.enum(['linear', 'log']), domain: z.tuple([number, number]).optional() }),
  y: z.object({ scale: z.enum(['linear', 'log']), domain: z.tuple([number, number]).optional() }),
  token: token.optional(),
  points: z.array(z.object({ x: number, y: number, out: z.boolean().optional() })),
  curve: z.array(z.object({ x: number, y: number })),
  /** Studentised residuals at the same x as the points. */
  residuals: z.array(z.object({ x: number, y: number, out: z.boolean().optional() })),
  flags: z.array(z.string()),
  leftOut: z.boolean().optional(),
})

export type FigureToken = (typeof FIGURE_TOKENS)[number]
export type FigureDash = (typeof FIGURE_DASHES)[number]
export type FigureAxis = z.infer<typeof FigureAxis>
export type FigureLayer = z.infer<typeof FigureLayer>
export type FigureStrip = z.infer<typeof FigureStrip>
export type FigureTable = z.infer<typeof FigureTable>
export type FigureSpec = z.infer<typeof FigureSpec>
export type SmallFigureSpec = z.infer<typeof SmallFigureSpec>
