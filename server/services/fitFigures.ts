import { NBSP, writeValue } from '../../shared/format'
import type { NamedQuantity } from '../../shared/evidence/quantity'
import type { TubeResult } from '../../shared/measurements/types'
import type { FigureSpec, SmallFigureSpec } from '../../shared/schemas/figure'

/** One tube small enough to see ten at once, made from what its kind says of the large figure. A course goes by its name, any other tube by its concentration. */
export function smallFigure(tube: TubeResult, figure: FigureSpec, isCourse = false): SmallFigureSpec {
  const written = tube.headline ? writeShort(tube.headline) : null
  const dots = figure.layers.find(layer => layer.type === 'points')
  return {
    id: `tube-${tube.tubeNo}`,
    title: isCourse ? tube.label : tube.role === 'blank' ? 'blank' : tube.role === 'reference' ? 'reference' : `${Number(tube.conc_mM.toPrecision(4))}${NBSP}mM`,
    value: written?.value ?? null,
    plusMinus: written?.plusMinus ?? null,
    text: figure.text,
    x: { scale: figure.x.scale, ...(figure.x.domain ? { domain: figure.x.domain } : {}) },
    y: { scale: figure.y.scale, ...(figure.y.domain ? { domain: figure.y.domain } : {}) },
    ...(dots ? { token: dots.token } : {}),
    points: tube.points.map(({ x, y, excluded }) => ({ x, y, ...(isOut(tube, excluded) ? { out: true } : {}) })),
    curve: tube.curve,
    residuals: tube.points.flatMap(({ x, studentised, excluded }) => studentised === null ? [] : [{ x, y: studentised, ...(isOut(tube, excluded) ? { out: true } : {}) }]),
    flags: tube.flags.map(flag => flag.title),
    ...(tube.excluded === null ? {} : { leftOut: true }),
  }
}

const isOut = (tube: TubeResult, excluded: string | null): boolean => tube.excluded !== null || excluded !== null

/** Times below a second in milliseconds, as the trade writes them. */
function writeShort({ value, kind, se, unit }: NamedQuantity): { value: string, plusMinus: string | null } {
  const inMs = unit === 's' && Math.abs(value) < 1
  const scale = inMs ? 1000 : 1
  const written = writeValue(value * scale, se === null ? null : se * scale)
  const power = written.power === null ? '' : `${NBSP}×${NBSP}10^{${written.power}}`
  const bound = kind === '=' ? '' : kind === '<' ? 'at most ' : 'at least '
  return { value: `${bound}${written.value}${power}${NBSP}${inMs ? 'ms' : unit}`, plusMinus: written.plusMinus }
}
