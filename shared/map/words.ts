/** Short words of the map: what a limit is called beside a mark, and what an agent in a lane lacks. */
import type { Quantity } from '../evidence/quantity'
import { scaled } from '../evidence/display'
import { formatNumber } from '../format'
import type { ScreeningProfile } from '../science/placement/profile'
import type { JudgedLimit, PlacedQuantity, Placement } from '../science/placement/types'

const SHORT_LIMITS: Readonly<Record<string, string>> = {
  workingConc: 'concentration', loss: 'loss', unbound: 'unbound metal', freeMetal: 'free metal', freeMetalWarning: 'free metal', pM: 'pM', zincPhosphate: 'Zn ratio', boundAtEquilibrium: 'equilibrium', ratio: 'r_2/r_1',
}
export const shortLimit = (limit: Pick<JudgedLimit, 'key' | 'label'>): string => SHORT_LIMITS[limit.key] ?? limit.label

/** Names of the limits an agent is over; warnings are not among them. */
export const limitsOver = (placement: Placement): string[] => placement.limits.filter(one => one.weight === 'limit' && one.outcome === 'over').map(shortLimit)
export const warningsOver = (placement: Placement): string[] => placement.limits.filter(one => one.weight === 'warning' && one.outcome === 'over').map(shortLimit)

/** What keeps an agent out of the plane, in few words. */
export function lackOf(placement: Placement, profile: Pick<ScreeningProfile, 'b0_T'>): string {
  if (placement.lane === 'lossMissing') {
    const known = [placement.acidHalfLife_s && 'acid t_{1/2}', placement.zincPhosphateRatio && 'Zn ratio'].filter(Boolean)
    return known.length > 0 ? `${known.join(', ')} only` : 'no rate constants'
  }
  if (placement.lane === 'concentrationMissing') {
    const symbol = { T1: 'r_1', T2: 'r_2', CEST: 'exchange' }[placement.mechanism]
    return `${symbol} at ${formatNumber(profile.b0_T)} T missing`
  }
  return placement.lane === 'neither' ? 'neither measured' : ''
}

/** A derived number as every screen takes it. It leads to the first value behind it; the others stand in the list of what it rests on. */
export function quantityOf(placed: PlacedQuantity | null): Quantity | null {
  if (!placed || !Number.isFinite(placed.value)) return null
  const isWhole = placed.interval !== null && placed.interval.every(Number.isFinite)
  return {
    value: placed.value, kind: placed.kind, se: placed.se !== null && Number.isFinite(placed.se) ? placed.se : null,
    interval: isWhole ? [placed.interval![0], placed.interval![1]] : null, unit: placed.unit, evidenceId: placed.evidenceIds[0] ?? null,
  }
}

const CONCENTRATIONS: readonly (readonly [number, string])[] = [[1000, 'mM'], [1, 'µM'], [1e-3, 'nM'], [1e-6, 'pM']]
/** A concentration in µM in the unit that reads best. */
export function asConcentration(quantity_uM: Quantity | null): Quantity | null {
  if (!quantity_uM) return null
  const [size, unit] = CONCENTRATIONS.find(([from]) => quantity_uM.value >= from) ?? CONCENTRATIONS.at(-1)!
  return scaled(quantity_uM, 1 / size, unit)
}

/** `3 placed, 1 lacks a measurement`. */
export function countWords(placements: readonly Placement[]): string {
  const placed = placements.filter(one => one.lane === 'plane').length
  const lacking = placements.length - placed
  return `${placed} placed, ${lacking === 0 ? 'none lacks' : lacking === 1 ? '1 lacks' : `${lacking} lack`} a measurement`
}

/** A share of draws as a probability with two digits: never 0 or 1, which no number of draws can show. */
export function chanceWords(share: number | null): string {
  if (share === null) return 'not known'
  if (share < 0.005) return 'below 0.01'
  return share > 0.995 ? 'above 0.99' : share.toFixed(2)
}
