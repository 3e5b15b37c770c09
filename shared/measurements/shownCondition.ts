import { fromStored, toStored, unitOf, type Unit } from '../science/units'
import type { ConditionSpec } from './types'

type Shown = Pick<ConditionSpec, 'dimension' | 'shownUnit'>

/** The unit between form and store; null where both are the same ('none' has units in name only, such as the K of a spread). */
function unitOfForm({ dimension, shownUnit }: Shown): Unit | null {
  return dimension === undefined || dimension === 'none' || shownUnit === undefined ? null : unitOf(shownUnit, dimension)
}

/** A stored condition in the unit of its form, without the last bits of the conversion: what was typed comes back. */
export function toShown(spec: Shown, value: number): number {
  const unit = unitOfForm(spec)
  return unit === null ? value : Number(fromStored(value, unit).toPrecision(12))
}

/** A number of the form in its stored unit. */
export function fromShown(spec: Shown, value: number): number {
  const unit = unitOfForm(spec)
  return unit === null ? value : toStored(value, unit)
}
