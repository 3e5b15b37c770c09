/** A whole set of species carried to another ionic strength (Davies) and temperature (van ’t Hoff), with what could not be carried named. */
import { moveToIonicStrength, moveToTemperature } from './activity'
import type { Species } from './system'

export interface Carry {
  readonly from: { readonly ionicStrength_M: number, readonly temperature_K: number }
  readonly to: { readonly ionicStrength_M: number, readonly temperature_K: number }
  /** Charge of every component, H among them. */
  readonly charges: Readonly<Record<string, number>>
  /** ΔH of the overall reaction by species, kJ/mol; where it is missing the constant is not moved in temperature. */
  readonly enthalpies_kJ_per_mol: Readonly<Record<string, number>>
}

export type Carried =
  | {
    readonly ok: true
    readonly species: readonly Species[]
    /** False where an ionic strength lies above the range of Davies: the constants are then only an indication. */
    readonly withinRange: boolean
    readonly notMovedInTemperature: readonly string[]
  }
  | { readonly ok: false, readonly reason: 'missingCharge' | 'outOfDomain', readonly message: string, readonly accepted: string }

/** Ionic strength first, at the temperature of the source; then temperature. The activity of water is taken as 1. */
export function carrySpecies(species: readonly Species[], carry: Carry): Carried {
  const { from, to } = carry
  if (!(from.ionicStrength_M >= 0 && to.ionicStrength_M >= 0 && to.ionicStrength_M < Infinity && from.ionicStrength_M < Infinity)) {
    return { ok: false, reason: 'outOfDomain', message: `Ionic strengths of ${from.ionicStrength_M} and ${to.ionicStrength_M} M.`, accepted: '0 M or more; Davies holds to 0.5 M.' }
  }
  if (!(from.temperature_K > 250 && to.temperature_K > 250 && from.temperature_K < 400 && to.temperature_K < 400)) {
    return { ok: false, reason: 'outOfDomain', message: `Temperatures of ${from.temperature_K} and ${to.temperature_K} K.`, accepted: 'Temperatures in kelvin, 250 to 400 (25 °C is 298.15 K).' }
  }
  const moved: Species[] = []
  let withinRange = true
  for (const one of species) {
    const stranger = Object.keys(one.stoichiometry).find(name => carry.charges[name] === undefined)
    if (stranger !== undefined) return { ok: false, reason: 'missingCharge', message: `${one.name} contains ${stranger}, whose charge is not stated.`, accepted: 'A charge for every component.' }
    const strength = moveToIonicStrength(one.logBeta, deltaZ2(one, carry.charges), from.ionicStrength_M, to.ionicStrength_M, from.temperature_K)
    withinRange = withinRange && strength.withinRange
    moved.push({ ...one, logBeta: moveToTemperature(strength.logBeta, carry.enthalpies_kJ_per_mol[one.name] ?? null, from.temperature_K, to.temperature_K).logBeta })
  }
  const isWarm = from.temperature_K !== to.temperature_K
  return { ok: true, species: moved, withinRange, notMovedInTemperature: isWarm ? species.map(one => one.name).filter(name => carry.enthalpies_kJ_per_mol[name] === undefined) : [] }
}

/** z² of the species less Σ a·z² of its components; a negative power of H stands for a water that gave it up. */
function deltaZ2(species: Species, charges: Readonly<Record<string, number>>): number {
  let charge = 0
  let squares = 0
  for (const [name, power] of Object.entries(species.stoichiometry)) {
    charge += power * charges[name]!
    squares += power * charges[name]! ** 2
  }
  return charge * charge - squares
}
