/**
 * Starts of the global fit that need no hand. Each Z becomes a rate R1ρ, in which R2 of water and the ratios of the pools are linear: for every place and exchange rate
 * on a grid one projection says how much a pool explains. Pools enter one after another, then each is looked for again beside the others.
 */
import { omega1_rad_per_s } from './transferForms'
import { ppmToRadPerS } from './poolSystem'
import { exchangeLine, rateOfZ, zOfRate, type Decay } from './rotatingFrame'
import { b1Of, type SeriesLayout } from './seriesLayout'
import type { UsedSpectrum } from './seriesProblem'
import type { Quantity } from './seriesTypes'

/** Nearer to water the rotating-frame picture does not hold. */
const NEAR_WATER_ppm = 0.5
const MOST_PLACES = 120
const EXCHANGE_GRID = Array.from({ length: 15 }, (_, i) => 10 * 10 ** (i / 4))
const RATE1_GRID = [0.25, 0.5, 1, 2]
const SOLUTE_RATE2_per_s = 100
const ROUNDS = 3
/** Exchange rates tried beside the best, as factors. */
const NEIGHBOURS = [3, 1 / 3]

interface Point { readonly y: number, readonly weight: number, readonly sinSquare: number, readonly square: number, readonly place_rad_per_s: number, readonly tube: number }
interface PoolGuess { shift_ppm: number, exchange_per_s: number, rate2_per_s: number, ratio_per_mM: number }
interface Guess { rate1_per_s: number, rate2_per_s: number[], pools: PoolGuess[], cost: number }

const startOf = (quantity: Quantity, fallback: number): number =>
  quantity.kind === 'fitted' ? quantity.start ?? clamp(fallback, quantity) : typeof quantity.value === 'number' ? quantity.value : quantity.value[0]!
interface Bounds { readonly min?: number, readonly max?: number }
const clamp = (x: number, { min = -Infinity, max = Infinity }: Bounds): number => Math.min(Math.max(x, min), max)
const boundsOf = (quantity: Quantity): Bounds => quantity.kind === 'fitted' ? quantity : {}
const isOpen = (quantity: Quantity): boolean => quantity.kind === 'fitted' && quantity.start === undefined

/** Values of the coordinates to start from, best first; from one start alone when every one is given. */
export function findStarts(layout: SeriesLayout, spectra: readonly UsedSpectrum[]): Float64Array[] {
  const { coordinates, model } = layout
  if (coordinates.every(one => one.start !== null)) return [Float64Array.from(coordinates, one => one.start!)]
  const rates = isOpen(model.water.rate1_per_s) ? RATE1_GRID : [startOf(model.water.rate1_per_s, 0.5)]
  const guesses = rates.flatMap(rate1_per_s => search(layout, pointsOf(layout, spectra, rate1_per_s), rate1_per_s))
  return guesses.sort((a, b) => a.cost - b.cost).map(guess => coordinatesOf(layout, guess))
}

function pointsOf(layout: SeriesLayout, spectra: readonly UsedSpectrum[], rate1_per_s: number): Point[] {
  const perPpm = ppmToRadPerS(layout.model.field_T)
  const held = layout.model.water.rate1_per_s
  const water = startOf(layout.model.water.shift_ppm, 0)
  const points: Point[] = []
  for (const { spectrum, offsets_ppm, z, weights } of spectra) {
    const square = omega1_rad_per_s(b1Of(spectrum, layout.tubes)) ** 2
    const own = held.kind === 'held' && typeof held.value !== 'number' ? held.value[spectrum.tube]! : rate1_per_s
    for (let i = 0; i < z.length; i++) {
      const distance = offsets_ppm[i]! - water
      if (Math.abs(distance) < NEAR_WATER_ppm) continue
      const place = distance * perPpm
      const cosSquare = (place * place) / (place * place + square)
      const decay: Decay = { cosSquare, rate1_per_s: own, duration_s: spectrum.duration_s, initial_frac: spectrum.initial_frac ?? 1 }
      const rate = rateOfZ(z[i]!, decay)
      if (rate === null) continue
      const slope = (zOfRate(rate * 1.001, decay) - z[i]!) / (rate * 0.001)
      points.push({ y: rate - own * cosSquare, weight: Math.abs(slope) * (weights?.[i] ?? 1), sinSquare: 1 - cosSquare, square, place_rad_per_s: place, tube: spectrum.tube })
    }
  }
  return points
}

/** Best guess and its neighbours in exchange rate. */
function search(layout: SeriesLayout, points: readonly Point[], rate1_per_s: number): Guess[] {
  const { model } = layout
  const pools = model.pools.map((pool): PoolGuess => ({
    shift_ppm: startOf(pool.shift_ppm, 0), exchange_per_s: startOf(pool.exchange_per_s, 500), rate2_per_s: startOf(pool.rate2_per_s, SOLUTE_RATE2_per_s), ratio_per_mM: startOf(pool.ratio_per_mM, 1e-5),
  }))
  const present = model.pools.map(pool => !isOpen(pool.shift_ppm))
  for (let round = 0; round < ROUNDS; round++) {
    pools.forEach((_, p) => {
      relocate(layout, points, { pools, present, p })
      present[p] = true
    })
  }
  if (model.pools.every(pool => isOpen(pool.shift_ppm) && pool.shift_ppm.kind === 'fitted' && pool.shift_ppm.min === undefined && pool.shift_ppm.max === undefined)) {
    pools.sort((a, b) => b.shift_ppm - a.shift_ppm)
  }
  const best = solveLinear(layout, points, pools, rate1_per_s)
  const others = pools.flatMap((pool, p) => isOpen(model.pools[p]!.exchange_per_s)
    ? NEIGHBOURS.map(by => solveLinear(layout, points, pools.map((one, q) => q === p ? { ...pool, exchange_per_s: pool.exchange_per_s * by } : one), rate1_per_s))
    : [])
  return [best, ...others]
}

/** Puts pool p at the place and exchange rate where it explains most of what the others leave. */
function relocate(layout: SeriesLayout, points: readonly Point[], { pools, present, p }: { pools: PoolGuess[], present: readonly boolean[], p: number }): void {
  const { model } = layout
  const spec = model.pools[p]!
  const places = isOpen(spec.shift_ppm) ? placesOf(layout, points, boundsOf(spec.shift_ppm)) : [pools[p]!.shift_ppm]
  const rates = isOpen(spec.exchange_per_s) ? EXCHANGE_GRID.filter(k => k === clamp(k, boundsOf(spec.exchange_per_s))) : [pools[p]!.exchange_per_s]
  if (places.length * rates.length < 2) return
  const others = pools.filter((_, q) => q !== p && present[q])
  const base = orthonormal([...waterColumns(layout, points), ...others.map(one => lineOf(layout, points, one))])
  const rest = project(columnOf(points, one => one.y * one.weight), base)
  let top = 0
  for (const shift_ppm of places) {
    for (const exchange_per_s of rates) {
      const line = project(lineOf(layout, points, { ...pools[p]!, shift_ppm, exchange_per_s }), base)
      const overlap = dot(line, rest)
      const gain = overlap > 0 ? (overlap * overlap) / dot(line, line) : 0
      if (gain > top) {
        top = gain
        Object.assign(pools[p]!, { shift_ppm, exchange_per_s })
      }
    }
  }
}

function placesOf(layout: SeriesLayout, points: readonly Point[], { min = -Infinity, max = Infinity }: Bounds): number[] {
  const perPpm = ppmToRadPerS(layout.model.field_T)
  const all = [...new Set(points.map(one => one.place_rad_per_s / perPpm))].sort((a, b) => a - b).filter(x => x >= min && x <= max)
  const step = Math.ceil(all.length / MOST_PLACES)
  return all.filter((_, i) => i % step === 0)
}

/** Columns of R2 of water: one for all tubes, or one each. A held R2 has none, and what it explains is small beside the pools. */
function waterColumns(layout: SeriesLayout, points: readonly Point[]): Float64Array[] {
  const { rate2_per_s: rate2 } = layout.model.water
  const column = (tube: number | null) => columnOf(points, one => tube === null || tube === one.tube ? one.weight * one.sinSquare : 0)
  return rate2.kind === 'fitted' && rate2.perTube ? layout.tubes.map((_, tube) => column(tube)) : [column(null)]
}

function lineOf(layout: SeriesLayout, points: readonly Point[], pool: PoolGuess): Float64Array {
  const place = pool.shift_ppm * ppmToRadPerS(layout.model.field_T)
  return columnOf(points, one => one.weight * layout.tubes[one.tube]!.conc_mM * exchangeLine(pool, one.square, place - one.place_rad_per_s))
}

/** Far faster than `Float64Array.from` with a function, and called for every place and rate of the grid. */
function columnOf(points: readonly Point[], value: (one: Point) => number): Float64Array {
  const column = new Float64Array(points.length)
  for (let i = 0; i < column.length; i++) column[i] = value(points[i]!)
  return column
}

const dot = (a: Float64Array, b: Float64Array): number => {
  let sum = 0
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!
  return sum
}

/** What is left of v beside orthonormal columns. */
function project(v: Float64Array, base: readonly Float64Array[]): Float64Array {
  const out = v.slice()
  for (const column of base) {
    const part = dot(column, out)
    for (let i = 0; i < out.length; i++) out[i]! -= part * column[i]!
  }
  return out
}

/** Gram–Schmidt; columns that lie in those before them are left out. */
function orthonormal(columns: readonly Float64Array[]): Float64Array[] {
  const base: Float64Array[] = []
  for (const column of columns) {
    const rest = project(project(column, base), base)
    const length = Math.sqrt(dot(rest, rest))
    if (length > 1e-9 * Math.sqrt(dot(column, column))) base.push(rest.map(x => x / length))
  }
  return base
}

/** R2 of water and ratios, none below zero, by coordinate descent: a convex problem of a handful of unknowns. */
function solveLinear(layout: SeriesLayout, points: readonly Point[], pools: readonly PoolGuess[], rate1_per_s: number): Guess {
  const water = waterColumns(layout, points)
  const columns = [...water, ...pools.map(one => lineOf(layout, points, one))]
  const start = [...water.map(() => 0), ...pools.map((one, p) => isOpen(layout.model.pools[p]!.ratio_per_mM) ? 0 : one.ratio_per_mM)]
  const isFree = [...water.map(() => true), ...pools.map((_, p) => isOpen(layout.model.pools[p]!.ratio_per_mM))]
  const rest = columnOf(points, one => one.y * one.weight)
  columns.forEach((column, c) => {
    for (let i = 0; i < rest.length; i++) rest[i]! -= start[c]! * column[i]!
  })
  const squares = columns.map(column => dot(column, column))
  for (let turn = 0; turn < 200; turn++) {
    columns.forEach((column, c) => {
      if (!isFree[c] || squares[c] === 0) return
      const moved = Math.max(0, start[c]! + dot(column, rest) / squares[c]!)
      const by = moved - start[c]!
      for (let i = 0; i < rest.length; i++) rest[i]! -= by * column[i]!
      start[c] = moved
    })
  }
  const tubes = layout.tubes.map((_, tube) => start[water.length === 1 ? 0 : tube]!)
  return { rate1_per_s, rate2_per_s: tubes, pools: pools.map((one, p) => ({ ...one, ratio_per_mM: start[water.length + p]! })), cost: dot(rest, rest) }
}

/** A guess as coordinates, brought inside their bounds. */
function coordinatesOf({ coordinates }: SeriesLayout, guess: Guess): Float64Array {
  return Float64Array.from(coordinates, ({ start, pool, name, tube, min, max }) => {
    if (start !== null) return start
    const found = pool >= 0
      ? { rate1_per_s: 1, ...guess.pools[pool]! }[name as keyof PoolGuess | 'rate1_per_s']
      : name === 'rate1_per_s' ? guess.rate1_per_s : name === 'rate2_per_s' ? guess.rate2_per_s[tube ?? 0]! : 0
    // On a bound a search has only one way to go: a little inside.
    const isLog = name !== 'shift_ppm'
    return clamp(found, isLog ? { min: min * 1.5, max: max / 1.5 } : { min, max })
  })
}
