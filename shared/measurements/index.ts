import { exchangeZSpectrum } from './exchange/zspectrum'
import { kineticsCourse } from './kinetics/course'
import { kineticsRates } from './kinetics/rates'
import { kineticsZincPhosphate } from './kinetics/zinc'
import { relaxFitted } from './relaxFitted'
import { relaxT1Ir } from './relaxT1Ir'
import { relaxT1Ll } from './relaxT1Ll'
import { relaxT1Sr } from './relaxT1Sr'
import { relaxT1Vfa } from './relaxT1Vfa'
import { relaxT2Echo } from './relaxT2Echo'
import { thermoTitration } from './titration/titration'
import type { MeasurementKind } from './types'

/** Every kind of measurement, by id; the order is that of the choice on the upload page. Services take the record as an argument. */
export const MEASUREMENTS: Readonly<Record<string, MeasurementKind>> = Object.fromEntries([relaxT1Ir, relaxT1Sr, relaxT1Ll, relaxT1Vfa, relaxT2Echo, relaxFitted, kineticsCourse, kineticsRates, kineticsZincPhosphate, thermoTitration, exchangeZSpectrum].map(kind => [kind.kind, kind]))

/** The kind of an id that came from outside; null when there is none. */
export function findMeasurement(kinds: Readonly<Record<string, MeasurementKind>>, id: string): MeasurementKind | null {
  return Object.hasOwn(kinds, id) ? kinds[id] ?? null : null
}

/** @throws Error for an id that is not registered: for ids read from our own tables */
export function measurement(id: string): MeasurementKind {
  const kind = findMeasurement(MEASUREMENTS, id)
  if (kind === null) throw new Error(`No measurement kind is called ${id}.`)
  return kind
}
