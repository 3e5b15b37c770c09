import type { Quantity } from './quantity'

/** A quantity in another unit of the same scale: value, error and interval move together, the bound stays a bound. */
export function scaled(quantity: Quantity, times: number, unit: string): Quantity {
  return {
    ...quantity, unit, value: quantity.value * times, se: quantity.se === null ? null : quantity.se * times,
    interval: quantity.interval ? [quantity.interval[0] * times, quantity.interval[1] * times] : null,
  }
}

export const asPercent = (quantity: Quantity): Quantity => scaled(quantity, 100, '%')

/** Lengths of the units that people use for times, longest first. */
const TIME_UNITS = [{ from_s: 31_557_600, unit: 'y' }, { from_s: 86_400, from: 172_800, unit: 'd' }, { from_s: 3600, from: 7200, unit: 'h' }, { from_s: 60, from: 120, unit: 'min' }] as const

/** A time in seconds in the unit that reads best: years, days, hours, minutes or seconds. */
export function asDuration(quantity: Quantity): Quantity {
  const found = TIME_UNITS.find(one => Math.abs(quantity.value) >= ('from' in one ? one.from : one.from_s))
  return found ? scaled(quantity, 1 / found.from_s, found.unit) : quantity
}
