/**
 * Whether constants may stand in one comparison. A constant belongs to its ionic strength, electrolyte, temperature and pH scale: log K of
 * the zinc complex of EDTA is 16.5 at 0.1 M and 18.0 at I = 0, a difference of the medium, not of the chemistry.
 */
import { DAVIES_LIMIT_M, type PhScale } from './activity'

export interface ConstantConditions {
  readonly label: string
  readonly ionicStrength_M: number | null
  readonly temperature_K: number | null
  /** Cation of the background electrolyte; null where not stated. */
  readonly cation: 'Na' | 'K' | 'tetraalkylammonium' | 'other' | null
  readonly phScale: PhScale | null
}

/** Apart by less than this the difference is below the usual error of a constant (common practice, no source). */
export const COMPARABLE_WITHIN = { ionicStrength_M: 0.02, temperature_K: 6 } as const

export type Comparison =
  | { readonly ok: true, readonly warnings: readonly string[] }
  | { readonly ok: false, readonly reason: 'ionicStrength' | 'temperature' | 'electrolyte' | 'phScale', readonly message: string, readonly accepted: string }

/** Judges a set of constants together; missing conditions are a warning, contradicting ones a refusal. */
export function comparable(constants: readonly ConstantConditions[]): Comparison {
  const strengths = spreadOf(constants, one => one.ionicStrength_M)
  if (strengths && strengths.high.value - strengths.low.value > COMPARABLE_WITHIN.ionicStrength_M) {
    const within = strengths.high.value <= DAVIES_LIMIT_M
    return {
      ok: false, reason: 'ionicStrength', message: `${strengths.low.label} is for I = ${strengths.low.value} M, ${strengths.high.label} for ${strengths.high.value} M.`,
      accepted: within ? 'Constants at one ionic strength; those up to 0.5 M can be carried to it by Davies, and then say so.' : 'Constants at one ionic strength; above 0.5 M Davies does not carry them.',
    }
  }
  const warm = spreadOf(constants, one => one.temperature_K)
  if (warm && warm.high.value - warm.low.value > COMPARABLE_WITHIN.temperature_K) {
    return { ok: false, reason: 'temperature', message: `${warm.low.label} is for ${warm.low.value} K, ${warm.high.label} for ${warm.high.value} K.`, accepted: 'Constants at one temperature, or with the enthalpy that carries them there (van ’t Hoff).' }
  }
  return mixedMedia(constants) ?? { ok: true, warnings: warningsOf(constants) }
}

interface Told { readonly label: string, readonly value: number }

function spreadOf(constants: readonly ConstantConditions[], read: (one: ConstantConditions) => number | null): { low: Told, high: Told } | null {
  const told = constants.flatMap((one): Told[] => {
    const value = read(one)
    return value === null ? [] : [{ label: one.label, value }]
  })
  if (told.length < 2) return null
  return { low: told.reduce((a, b) => b.value < a.value ? b : a), high: told.reduce((a, b) => b.value > a.value ? b : a) }
}

function mixedMedia(constants: readonly ConstantConditions[]): Comparison | null {
  const sodium = constants.find(one => one.cation === 'Na')
  const inert = constants.find(one => one.cation === 'tetraalkylammonium')
  if (sodium && inert) {
    return { ok: false, reason: 'electrolyte', message: `${sodium.label} was measured with sodium, ${inert.label} with tetraalkylammonium: sodium binds macrocyclic ligands, which lowers log K by 1 to 3.`, accepted: 'Constants of one electrolyte.' }
  }
  const concentration = constants.find(one => one.phScale === 'concentration')
  const activity = constants.find(one => one.phScale === 'activity')
  if (concentration && activity) return { ok: false, reason: 'phScale', message: `${concentration.label} is on the concentration scale, ${activity.label} on that of activity.`, accepted: 'Constants of one pH scale; at I = 0.15 M the scales are 0.12 apart per proton.' }
  return null
}

function warningsOf(constants: readonly ConstantConditions[]): string[] {
  const missing = (what: string, isMissing: (one: ConstantConditions) => boolean): string[] => {
    const names = constants.filter(isMissing).map(one => one.label)
    return names.length === 0 ? [] : [`${what} of ${names.join(', ')} not stated: taken as comparable, unproved.`]
  }
  return [
    ...missing('Ionic strength', one => one.ionicStrength_M === null), ...missing('Temperature', one => one.temperature_K === null),
    ...missing('Electrolyte', one => one.cation === null), ...missing('pH scale', one => one.phScale === null),
  ]
}
