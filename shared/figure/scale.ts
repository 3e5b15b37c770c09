import { formatFixed } from '../format'

/** From values to pixels along one axis, and where its ticks stand. Domain low to high; range may run either way. */
export interface Scale {
  kind: 'linear' | 'log'
  domain: readonly [number, number]
  toPixel: (value: number) => number
  contains: (value: number) => boolean
}
export interface Tick { value: number, label: string }

const NICE = [1, 2, 2.5, 5, 10] as const
/** Ends of a domain and computed ticks meet only to rounding. */
const SLACK = 1e-9
/** Share of the span that rounding the lower end outwards may leave empty. */
const MOST_WASTE = 0.12

export function makeScale(kind: 'linear' | 'log', domain: readonly [number, number], range: readonly [number, number]): Scale {
  const place = kind === 'log' ? Math.log10 : (value: number) => value
  const [low, high] = [place(domain[0]), place(domain[1])]
  const perUnit = high === low ? 0 : (range[1] - range[0]) / (high - low)
  const slack = SLACK * Math.abs(high - low)
  return {
    kind,
    domain,
    // To a hundredth: exp and log differ in the last bit between engines, and server and browser must draw the same.
    toPixel: value => Math.round((range[0] + (place(value) - low) * perUnit) * 100) / 100,
    contains: value => (kind === 'linear' || value > 0) && place(value) >= low - slack && place(value) <= high + slack,
  }
}

/** The step of 1, 2, 2.5 or 5 times a power of ten that gives at most `most` intervals. */
export function niceStep(span: number, most: number): number {
  const rough = span / Math.max(most, 1)
  const power = 10 ** Math.floor(Math.log10(rough))
  return power * (NICE.find(nice => nice * power >= rough * (1 - SLACK)) ?? 10)
}

/** Ticks of a linear axis, at most `most` intervals. Empty when the domain has no length. */
export function linearTicks(domain: readonly [number, number], most: number): number[] {
  const [low, high] = domain
  if (!(high > low)) return []
  const step = niceStep(high - low, most)
  const first = Math.ceil(low / step - SLACK)
  const count = Math.floor(high / step + SLACK) - first + 1
  return Array.from({ length: count }, (_, at) => Number(((first + at) * step).toPrecision(12)))
}

/** Decades; 1, 2 and 5 of each where fewer than two decades are shown; every second or third where there are too many. */
export function logTicks(domain: readonly [number, number], most: number): number[] {
  const [low, high] = domain
  if (!(low > 0 && high > low)) return []
  const decades = Math.log10(high / low)
  const factors = decades < 2.2 && most >= 4 ? [1, 2, 5] : [1]
  const first = Math.floor(Math.log10(low) - SLACK)
  const last = Math.ceil(Math.log10(high) + SLACK)
  const every = factors.length === 1 ? Math.max(1, Math.ceil(decades / Math.max(most, 1))) : 1
  const exponents = Array.from({ length: last - first + 1 }, (_, at) => first + at).filter(exponent => exponent % every === 0)
  const isWithin = (value: number): boolean => value >= low * (1 - SLACK) && value <= high * (1 + SLACK)
  return exponents.flatMap(exponent => factors.map(factor => Number((factor * 10 ** exponent).toPrecision(12)))).filter(isWithin)
}

/** Ticks with labels of equal decimals, or powers of ten where plain figures would be long. */
export function labelledTicks(scale: Scale, most: number): Tick[] {
  if (scale.kind === 'log') {
    const values = logTicks(scale.domain, most)
    const isPlain = values.every(value => value >= 0.001 && value <= 100_000)
    return values.map(value => ({ value, label: isPlain ? formatFixed(value, Math.max(0, -Math.floor(Math.log10(value) + SLACK))) : powerLabel(value) }))
  }
  const values = linearTicks(scale.domain, most)
  const step = values.length > 1 ? Math.abs((values[1] ?? 0) - (values[0] ?? 0)) : 1
  const size = Math.max(...values.map(Math.abs), 0)
  if (size !== 0 && (size >= 1e6 || size < 1e-3)) return powerTicks(values, size)
  return values.map(value => ({ value, label: formatFixed(value, decimalsOfStep(step)) }))
}

/** Domain that holds the values: from zero when they begin near it, rounded outwards to the step of the ticks. Log: a little air at both ends. */
export function domainOf(values: readonly number[], kind: 'linear' | 'log', rounded: boolean): [number, number] {
  const usable = values.filter(value => Number.isFinite(value) && (kind === 'linear' || value > 0))
  if (usable.length === 0) return kind === 'log' ? [0.1, 10] : [0, 1]
  const [low, high] = usable.reduce(([least, most], value) => [Math.min(least, value), Math.max(most, value)], [Infinity, -Infinity])
  if (kind === 'log') return high > low ? [low / 1.15, high * 1.15] : [low / 2, high * 2]
  if (high === low) return low === 0 ? [0, 1] : low > 0 ? [0, low * 1.25] : [low * 1.25, 0]
  const from = low >= 0 && low < 0.35 * high ? 0 : low
  if (!rounded) return [from === 0 ? 0 : from - 0.03 * (high - from), high + 0.03 * (high - from)]
  const step = niceStep(high - from, 5)
  const roundedFrom = Math.floor(from / step + SLACK) * step
  // A band that dips just below zero must not cost a whole step of empty plot.
  const lowEnd = from - roundedFrom > MOST_WASTE * (high - from) ? from - 0.03 * (high - from) : roundedFrom
  return [lowEnd, Math.ceil(high / step - SLACK) * step]
}

/** Decimals that a step between ticks needs. */
export function decimalsOfStep(step: number): number {
  const decimals = Math.max(0, -Math.floor(Math.log10(step) + SLACK))
  // 0.25 needs one place more than its size says.
  return Math.abs(step * 10 ** decimals - Math.round(step * 10 ** decimals)) > 1e-6 ? decimals + 1 : decimals
}
const powerLabel = (value: number): string => {
  const exponent = Math.round(Math.log10(value))
  return Math.abs(value / 10 ** exponent - 1) < 1e-6 ? `10^{${exponent}}` : `${Number((value / 10 ** Math.floor(Math.log10(value))).toPrecision(2))}·10^{${Math.floor(Math.log10(value))}}`
}
function powerTicks(values: readonly number[], size: number): Tick[] {
  const exponent = Math.floor(Math.log10(size) + SLACK)
  const scaled = values.map(value => Number((value / 10 ** exponent).toPrecision(6)))
  const decimals = Math.max(...scaled.map(value => (String(value).split('.')[1] ?? '').length))
  return values.map((value, at) => ({ value, label: value === 0 ? '0' : `${formatFixed(scaled[at] ?? 0, decimals)}·10^{${exponent}}` }))
}
