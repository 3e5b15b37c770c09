import { exactExp, exactLog } from '../exactMath'
import type { PoolSystem } from './poolSystem'
import { COLUMN, soluteColumn } from './sensitivities'
import type { Quantity, SeriesModel, SeriesSpectrum, SeriesTube } from './seriesTypes'

/** One fitted number. Positive quantities are fitted as logarithms, which keeps them positive and their product with others straight. */
export interface Coordinate {
  readonly name: string
  readonly of: string
  readonly unit: string
  readonly tube: number | null
  /** Position of the pool; −1 for water. */
  readonly pool: number
  readonly isLog: boolean
  /** Null: to be found. */
  readonly start: number | null
  readonly min: number
  readonly max: number
}

/** A held number whose error is carried. */
export interface HeldError { readonly slot: Slot, readonly se: number, readonly source: string }

/** One number of the model: of water or of a pool. */
export interface Slot {
  readonly name: string
  readonly of: string
  readonly pool: number
  readonly unit: string
  readonly quantity: Quantity
  readonly min: number
  readonly max: number
  readonly isLog: boolean
}

export interface SeriesLayout {
  readonly model: SeriesModel
  readonly tubes: readonly SeriesTube[]
  readonly slots: readonly Slot[]
  readonly coordinates: readonly Coordinate[]
  /** Position among the coordinates by slot and tube; −1 where held or without meaning. */
  readonly positions: readonly (readonly number[])[]
  readonly heldErrors: readonly HeldError[]
}

/** Bounds where none are given. Common practice, no source: wide enough for every proton that exchanges slowly enough to be seen. */
const LIMITS = {
  waterShift: [-1, 1], rate1: [0.02, 100], rate2: [0.1, 1e5], shift: [-500, 500], exchange: [1, 1e6], ratio: [1e-9, 0.1],
} as const

export function layoutOf(model: SeriesModel, tubes: readonly SeriesTube[]): SeriesLayout {
  const slots = slotsOf(model)
  const coordinates: Coordinate[] = []
  const positions = slots.map((slot) => {
    const { quantity } = slot
    if (quantity.kind === 'held') return tubes.map(() => -1)
    const add = (tube: number | null) => coordinates.push({
      name: slot.name, of: slot.of, unit: slot.unit, pool: slot.pool, isLog: slot.isLog, tube, start: quantity.start ?? null,
      min: quantity.min ?? slot.min, max: quantity.max ?? slot.max,
    }) - 1
    // A tube without agent says nothing of a pool.
    if (quantity.perTube) return tubes.map(({ conc_mM: conc }, tube) => slot.pool >= 0 && conc === 0 ? -1 : add(tube))
    const shared = add(null)
    return tubes.map(() => shared)
  })
  const heldErrors = slots.flatMap((slot) => {
    const { quantity } = slot
    return quantity.kind === 'held' && quantity.se != null && quantity.se > 0 ? [{ slot, se: quantity.se, source: `${slot.name} of ${slot.of}` }] : []
  })
  return { model, tubes, slots, coordinates, positions, heldErrors }
}

function slotsOf({ water, pools }: SeriesModel): Slot[] {
  const slot = (of: string, pool: number, name: string, unit: string, quantity: Quantity, limits: readonly [number, number], isLog: boolean): Slot =>
    ({ of, pool, name, unit, quantity, min: limits[0], max: limits[1], isLog })
  return [
    slot('water', -1, 'rate1_per_s', 's^-1', water.rate1_per_s, LIMITS.rate1, true),
    slot('water', -1, 'rate2_per_s', 's^-1', water.rate2_per_s, LIMITS.rate2, true),
    slot('water', -1, 'shift_ppm', 'ppm', water.shift_ppm, LIMITS.waterShift, false),
    ...pools.flatMap((one, pool) => [
      slot(one.label, pool, 'shift_ppm', 'ppm', one.shift_ppm, LIMITS.shift, false),
      slot(one.label, pool, 'rate1_per_s', 's^-1', one.rate1_per_s, LIMITS.rate1, true),
      slot(one.label, pool, 'rate2_per_s', 's^-1', one.rate2_per_s, LIMITS.rate2, true),
      slot(one.label, pool, 'exchange_per_s', 's^-1', one.exchange_per_s, LIMITS.exchange, true),
      slot(one.label, pool, 'ratio_per_mM', 'mM^-1', one.ratio_per_mM, LIMITS.ratio, true),
    ]),
  ]
}

/** Column of the sensitivities that belongs to a slot: the order of the slots is theirs but for B1. */
export function columnOf(slot: Slot): number {
  if (slot.pool < 0) return slot.name === 'rate1_per_s' ? COLUMN.waterRate1 : slot.name === 'rate2_per_s' ? COLUMN.waterRate2 : COLUMN.waterShift
  const which = { shift_ppm: 'shift', rate1_per_s: 'longitudinal', rate2_per_s: 'transverse', exchange_per_s: 'exchange', ratio_per_mM: 'ratio' } as const
  return soluteColumn(slot.pool, which[slot.name as keyof typeof which])
}

export const toInner = (coordinate: Pick<Coordinate, 'isLog'>, value: number): number => coordinate.isLog ? exactLog(value) : value
export const toOuter = (coordinate: Pick<Coordinate, 'isLog'>, inner: number): number => coordinate.isLog ? exactExp(inner) : inner

/** Stands for what a tube without agent has none of; its proton ratio of zero takes it out. */
const WITHOUT_MEANING = 1

/** Value of a slot in a tube. @param outer value of every coordinate */
export function valueOf(layout: SeriesLayout, slotAt: number, tube: number, outer: ArrayLike<number>): number {
  const { quantity } = layout.slots[slotAt]!
  if (quantity.kind === 'held') return typeof quantity.value === 'number' ? quantity.value : quantity.value[tube]!
  const position = layout.positions[slotAt]![tube]!
  return position < 0 ? WITHOUT_MEANING : outer[position]!
}

/** The pools of one tube. */
export function systemOf(layout: SeriesLayout, tube: number, outer: ArrayLike<number>): PoolSystem {
  const { model, tubes } = layout
  const at = (slot: number) => valueOf(layout, slot, tube, outer)
  return {
    field_T: model.field_T, water: { rate1_per_s: at(0), rate2_per_s: at(1) }, waterShift_ppm: at(2),
    solutes: model.pools.map((_, pool) => {
      const o = 3 + 5 * pool
      return { shift_ppm: at(o), rate1_per_s: at(o + 1), rate2_per_s: at(o + 2), exchange_per_s: at(o + 3), ratio: at(o + 4) * tubes[tube]!.conc_mM }
    }),
  }
}

/** B1 in the tube, µT. */
export const b1Of = (spectrum: SeriesSpectrum, tubes: readonly SeriesTube[]): number => spectrum.b1_uT * (tubes[spectrum.tube]!.b1Scale ?? 1)
