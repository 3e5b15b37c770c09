/** What must be right of a set of constants before anything is computed from it: forms that agree, species that balance, protonation that is there. */
import { overallFromStepwise, stepwiseFromOverall } from './protonation'
import type { Species } from './system'

export interface ConstantsRefused {
  readonly ok: false
  readonly reason: 'contradiction' | 'missing' | 'unbalanced' | 'outOfDomain' | 'lengthMismatch'
  readonly message: string
  readonly accepted: string
}

const refuse = (reason: ConstantsRefused['reason'], message: string, accepted: string): ConstantsRefused => ({ ok: false, reason, message, accepted })

/** Printed constants carry two digits: sums of a few may differ by this much. */
export const FORM_TOLERANCE = 0.05

export interface ConstantForms {
  /** log K of each step, most basic first. */
  readonly stepwise?: readonly number[] | null
  /** log β, one proton (or ligand) first. */
  readonly overall?: readonly number[] | null
}

/** Stepwise and overall constants from whichever was given; where both were, they must agree. */
export function reconcileForms({ stepwise, overall }: ConstantForms): { readonly ok: true, readonly stepwise: readonly number[], readonly overall: readonly number[] } | ConstantsRefused {
  const given = [...(stepwise ?? []), ...(overall ?? [])]
  if (given.length === 0) return refuse('missing', 'No constant is given.', 'Stepwise log K, most basic first, or overall log β, one proton first.')
  const bad = given.find(value => !Number.isFinite(value))
  if (bad !== undefined) return refuse('outOfDomain', `A constant is ${bad}.`, 'Finite logarithms.')
  if (!stepwise?.length) return { ok: true, stepwise: stepwiseFromOverall(overall!), overall: overall! }
  const summed = overallFromStepwise(stepwise)
  if (!overall?.length) return { ok: true, stepwise, overall: summed }
  if (overall.length !== stepwise.length) return refuse('lengthMismatch', `${stepwise.length} stepwise constants stand against ${overall.length} overall ones.`, 'One form only, or both with one constant for each step.')
  const step = summed.findIndex((value, j) => Math.abs(value - overall[j]!) > FORM_TOLERANCE * (j + 1))
  if (step < 0) return { ok: true, stepwise, overall: summed }
  return refuse('contradiction', `The stepwise constants add up to log β = ${summed[step]!.toFixed(2)} at step ${step + 1}, but ${overall[step]!.toFixed(2)} is given.`, `One form only, or two that agree to ${FORM_TOLERANCE} per step. Where the second list also rises by a few units a step, it may be stepwise itself.`)
}

/** A species with its charge, for the check of balance. */
export interface ChargedSpecies extends Species { readonly charge: number }

/** Charge in, charge out: the charge of every species is that of what it is made of. Null when all balance. */
export function findUnbalanced(species: readonly ChargedSpecies[], charges: Readonly<Record<string, number>>): ConstantsRefused | null {
  for (const one of species) {
    let sum = 0
    for (const [name, power] of Object.entries(one.stoichiometry)) {
      const charge = charges[name]
      if (charge === undefined) return refuse('missing', `${one.name} contains ${name}, whose charge is not stated.`, 'A charge for every component.')
      sum += power * charge
    }
    if (Math.abs(sum - one.charge) > 1e-9) return refuse('unbalanced', `${one.name} has charge ${one.charge}, but what it is made of adds up to ${sum}.`, 'Powers and a charge that balance; OH counts as H to the power −1.')
  }
  return null
}

/**
 * Protonation constants below `donors` in number leave the conditional constant too high at low pH; none at all makes it wrong everywhere.
 * `pH` is the lowest at which the constants will be used. Null when there is enough.
 */
export function findMissingProtonation(logK: readonly number[] | null, donors: number, pH: number): ConstantsRefused | null {
  if (!(pH >= 0 && pH <= 14)) return refuse('outOfDomain', `pH is ${pH}.`, 'pH from 0 to 14.')
  const known = logK ?? []
  if (donors > 0 && known.length === 0) return refuse('missing', 'The ligand has basic donors and no protonation constant.', 'At least the protonation constants above the pH of use.')
  const last = known[known.length - 1]
  if (known.length >= donors || last === undefined || last < pH - 1) return null
  return refuse('missing', `${known.length} of ${donors} protonation constants are given and the last, ${last}, is not a unit below pH ${pH}: the next may still count.`, 'Protonation constants down to one unit below the pH of use.')
}
