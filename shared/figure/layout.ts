import type { FigureAxis, FigureDash, FigureLayer, FigureSpec, FigureToken } from '../schemas/figure'
import { parseNotation } from '../notation'
import { domainOf, labelledTicks, makeScale, type Scale, type Tick } from './scale'

/** Where everything of a figure stands, in pixels of its own box. Pure, so that screens, paper and tests agree. */
export interface FigureLayout {
  width: number
  height: number
  left: number
  right: number
  top: number
  bottom: number
  x: Scale
  y: Scale
  xTicks: Tick[]
  yTicks: Tick[]
  endLabels: EndLabel[]
  key: KeyEntry[]
  strip: { top: number, bottom: number, y: Scale } | null
  isNarrow: boolean
}
export interface EndLabel { text: string, token: FigureToken, x: number, y: number }
export interface KeyEntry { name: string, token: FigureToken, shape: 'points' | 'open' | 'square' | 'line' | 'band' | 'cross', dash: FigureDash }

const TICK_GLYPH_px = 6.1
const LABEL_GLYPH_px = 6.6
const LABEL_LINE_px = 14
const NARROW_px = 440
const STRIP_px = 56
const STRIP_GAP_px = 24
const AXIS_ROOM_px = 38

export function layoutFigure(figure: FigureSpec, width: number, height: number): FigureLayout {
  const isNarrow = width < NARROW_px
  const y0 = makeScale(figure.y.scale, domainFor(figure, 'y'), [0, 1])
  const yTicks = labelledTicks(y0, height < 180 ? 3 : 5)
  const left = 26 + Math.max(14, ...yTicks.map(tick => lengthOf(tick.label) * TICK_GLYPH_px))
  const names = labelledLayers(figure.layers)
  const room = isNarrow || names.length === 0 ? 14 : Math.min(0.3 * width, 12 + Math.max(...names.map(layer => lengthOf(layer.name) * LABEL_GLYPH_px)))
  const right = Math.max(width - room, left + 40)
  const top = 14
  const stripRoom = figure.strip ? STRIP_px + STRIP_GAP_px : 0
  const bottom = Math.max(height - AXIS_ROOM_px - stripRoom, top + 40)
  const x = makeScale(figure.x.scale, domainFor(figure, 'x'), figure.x.reversed ? [right, left] : [left, right])
  const y = makeScale(figure.y.scale, y0.domain, figure.y.reversed ? [top, bottom] : [bottom, top])
  const limit = figure.strip?.limit ?? 3
  const stripTop = height - AXIS_ROOM_px - STRIP_px
  return {
    width, height, left, right, top, bottom, x, y, yTicks, isNarrow,
    xTicks: labelledTicks(x, Math.max(2, Math.floor((right - left) / 72))),
    endLabels: isNarrow ? [] : placeLabels(names, x, y, { right, top, bottom }),
    key: keyEntries(figure.layers, isNarrow ? [] : names.map(layer => layer.name)),
    strip: figure.strip ? { top: stripTop, bottom: stripTop + STRIP_px, y: makeScale('linear', [-limit * 1.15, limit * 1.15], [stripTop + STRIP_px, stripTop]) } : null,
  }
}

/** Solid for the first three series; from the fourth on the dash differs as well, for eyes to which the colours come close. */
export function dashOf(token: FigureToken, dash?: FigureDash): FigureDash {
  if (dash) return dash
  return token === 's4' ? 'dashed' : token === 's5' ? 'dotted' : token === 's6' ? 'dashdot' : 'solid'
}
export const DASH_ARRAYS: Readonly<Record<FigureDash, string | undefined>> = { solid: undefined, dashed: '6 4', dotted: '1.5 3.5', dashdot: '8 3 1.5 3' }

/** Points of a layer that lie beyond a fixed domain: drawn as arrows at the edge, never silently dropped. */
export function offScale<P extends { x: number, y: number }>(points: readonly P[], layout: Pick<FigureLayout, 'x' | 'y'>): P[] {
  return points.filter(point => layout.x.contains(point.x) && !layout.y.contains(point.y))
}

/** The twin of a figure that brings none of its own: one row a point, by the name of its layer. */
export function twinTable(figure: FigureSpec): NonNullable<FigureSpec['table']> {
  if (figure.table) return figure.table
  const rows = figure.layers.flatMap((layer) => {
    if (layer.type === 'rule' || layer.type === 'note') return []
    return layer.points.map(point => ({
      series: layer.name, x: point.x, y: 'y' in point ? point.y : null, low: 'low' in point ? point.low : null, high: 'high' in point ? point.high : null,
    }))
  })
  const hasEnds = rows.some(row => row.low !== null)
  const column = (key: string, axis: FigureAxis, label = axis.label) => ({ key, label, unit: axis.unit, numeric: true })
  return {
    columns: [
      { key: 'series', label: 'Series', unit: null, numeric: false }, column('x', figure.x), column('y', figure.y),
      ...hasEnds ? [column('low', figure.y, 'lower end'), column('high', figure.y, 'upper end')] : [],
    ],
    rows,
  }
}

function domainFor(figure: FigureSpec, axis: 'x' | 'y'): readonly [number, number] {
  const spec = figure[axis]
  if (spec.domain) return spec.domain
  const values = figure.layers.flatMap(layer => valuesOf(layer, axis))
  if (axis === 'x' && figure.strip) values.push(...figure.strip.points.map(point => point.x))
  return domainOf(values, spec.scale, axis === 'y')
}

function valuesOf(layer: FigureLayer, axis: 'x' | 'y'): number[] {
  if (layer.type === 'note') return []
  if (layer.type === 'rule') return layer.axis === axis ? [layer.at] : []
  if (axis === 'x') return layer.points.flatMap(point => 'xLow' in point ? [point.x, point.xLow ?? point.x, point.xHigh ?? point.x] : [point.x])
  if (layer.type === 'bars') return [0, ...layer.points.map(point => point.y)]
  if (layer.type === 'band') return layer.points.flatMap(point => [point.low, point.high])
  return layer.points.flatMap(point => 'low' in point ? [point.y, point.low, point.high] : [point.y])
}

type NamedLayer = Extract<FigureLayer, { type: 'line' | 'points' }>

function labelledLayers(layers: readonly FigureLayer[]): NamedLayer[] {
  return layers.filter((layer): layer is NamedLayer => (layer.type === 'line' && layer.labelled !== false && layer.points.length > 0) || (layer.type === 'points' && layer.joined === true && layer.points.length > 0))
    .filter(layer => layer.name !== '')
}

function placeLabels(layers: readonly NamedLayer[], x: Scale, y: Scale, box: { right: number, top: number, bottom: number }): EndLabel[] {
  const labels = layers.flatMap((layer) => {
    const inside = layer.points.filter(point => x.contains(point.x) && y.contains(point.y))
    const last = inside.reduce<{ x: number, y: number } | null>((most, point) => most === null || x.toPixel(point.x) > x.toPixel(most.x) ? point : most, null)
    return last ? [{ text: layer.name, token: layer.token, x: box.right + 6, y: y.toPixel(last.y) }] : []
  }).sort((a, b) => a.y - b.y)
  // Pushed down where they would touch, then up again from the lower edge.
  for (let at = 1; at < labels.length; at++) pushApart(labels[at - 1], labels[at], 'down')
  const lowest = labels.at(-1)
  if (lowest) lowest.y = Math.min(lowest.y, box.bottom)
  for (let at = labels.length - 1; at > 0; at--) pushApart(labels[at - 1], labels[at], 'up')
  return labels
}

function pushApart(upper: EndLabel | undefined, lower: EndLabel | undefined, way: 'up' | 'down'): void {
  if (!upper || !lower || lower.y - upper.y >= LABEL_LINE_px) return
  if (way === 'down') lower.y = upper.y + LABEL_LINE_px
  else upper.y = lower.y - LABEL_LINE_px
}

/** What no label at a line's end names: said in a row above the plot. One unnamed kind of points needs no key. */
function keyEntries(layers: readonly FigureLayer[], labelled: readonly string[]): KeyEntry[] {
  const entries = layers.flatMap((layer): KeyEntry[] => {
    if (layer.type === 'note' || layer.type === 'rule' || layer.type === 'errorBars' || layer.name === '' || labelled.includes(layer.name)) return []
    if (layer.type === 'line') return layer.labelled === false ? [] : [{ name: layer.name, token: layer.token, shape: 'line', dash: dashOf(layer.token, layer.dash) }]
    if (layer.type === 'cross') return [{ name: layer.name, token: layer.token ?? 'ink-3', shape: 'cross', dash: 'solid' }]
    if (layer.type === 'band') return [{ name: layer.name, token: layer.token, shape: 'band', dash: 'solid' }]
    return [{ name: layer.name, token: layer.token, shape: layer.type !== 'points' ? 'points' : layer.square ? 'square' : layer.open ? 'open' : 'points', dash: 'solid' }]
  })
  return entries.length > 1 ? entries.filter((entry, at) => entries.findIndex(one => one.name === entry.name) === at) : []
}

const lengthOf = (text: string): number => parseNotation(text).reduce((sum, part) => sum + part.text.length * (part.at === 'base' ? 1 : 0.76), 0)
