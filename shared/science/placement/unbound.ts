/** Unbound metal at the working concentration: what the batch brings along and what lets go. */

import { logInterval } from '../kinetics/firstOrder'
import { combineBounds } from '../kinetics/rateLaw'
import type { PlacedQuantity } from './types'

/** f_free + (1 − f_free)·loss. */
export function unboundFraction(freeMetal_frac: number, loss_frac: number): number {
  return freeMetal_frac + (1 - freeMetal_frac) * loss_frac
}

/**
 * f_free + (1 − f_free)·loss. A free-metal fraction that was never measured is not zero: the loss alone then says "at least",
 * and nothing at all where the loss is itself only "at most".
 */
export function unboundTotal(loss: PlacedQuantity | null, free: PlacedQuantity | null): PlacedQuantity | null {
  if (loss === null) return null
  const base = { unit: '', label: 'Unbound metal', carried: loss.carried, evidenceIds: [...loss.evidenceIds, ...(free?.evidenceIds ?? [])] }
  if (free === null) return loss.kind === '<' ? null : { ...base, value: loss.value, kind: '>', se: null, interval: null }
  const released = (1 - free.value) * loss.value
  const part = (kind: '=' | '<' | '>'): number => (free.kind === kind ? free.value : 0) + (loss.kind === kind ? released : 0)
  const errors = [free.kind === '=' ? free.se : 0, loss.kind === '=' ? loss.se : 0]
  const se = errors.some(e => e === null) ? null : Math.sqrt(((1 - loss.value) * errors[0]!) ** 2 + ((1 - free.value) * errors[1]!) ** 2)
  return { ...base, ...combineBounds({ exact: part('='), below: part('<'), above: part('>'), se }) }
}

/** A fraction times the working concentration; null where one is "at most" and the other "at least". */
export function timesConcentration(fraction: PlacedQuantity, conc: PlacedQuantity, as: { factor: number, unit: string, label: string }): PlacedQuantity | null {
  const kinds = new Set([fraction.kind, conc.kind].filter(kind => kind !== '='))
  if (kinds.size > 1) return null
  const value = fraction.value * conc.value * as.factor
  const se = fraction.se === null || conc.se === null ? null : value * Math.sqrt((fraction.se / fraction.value) ** 2 + (conc.se / conc.value) ** 2)
  return {
    value, kind: [...kinds][0] ?? '=', se, interval: se === null ? null : logInterval(value, se), unit: as.unit, label: as.label,
    evidenceIds: [...new Set([...conc.evidenceIds, ...fraction.evidenceIds])], carried: fraction.carried || conc.carried,
  }
}
