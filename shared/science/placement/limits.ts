/** The limits of a profile, each declared once: what is judged, against which field, in which unit, how strictly. */
import type { ProfileNumberKey } from './profileFields'
import type { ScreeningProfile } from './profile'
import type { JudgedLimit, LimitOutcome, PlacedQuantity } from './types'

export interface LimitFacts {
  readonly workingConc_mM: PlacedQuantity | null
  readonly loss_frac: PlacedQuantity | null
  readonly unbound_uM: PlacedQuantity | null
  readonly freeMetal_frac: PlacedQuantity | null
  readonly pM: PlacedQuantity | null
  readonly zincPhosphateRatio: PlacedQuantity | null
  readonly boundAtEquilibrium_frac: PlacedQuantity | null
  readonly ratioR2R1: PlacedQuantity | null
}

export interface LimitDeclaration {
  readonly key: string
  readonly label: string
  readonly unit: string
  readonly bound: 'atMost' | 'atLeast'
  readonly weight: 'limit' | 'warning'
  readonly field: ProfileNumberKey
  readonly fact: keyof LimitFacts
  /** Judged at the unfavourable end of the 95 % interval where there is one; otherwise at the value. */
  readonly atInterval: boolean
}

export const LIMITS: readonly LimitDeclaration[] = [
  { key: 'workingConc', label: 'Working concentration', unit: 'mM', bound: 'atMost', weight: 'limit', field: 'limitWorkingConc_mM', fact: 'workingConc_mM', atInterval: false },
  { key: 'loss', label: 'Loss, upper 95 %', unit: '', bound: 'atMost', weight: 'limit', field: 'limitLoss_frac', fact: 'loss_frac', atInterval: true },
  { key: 'unbound', label: 'Unbound metal at the working concentration', unit: 'µM', bound: 'atMost', weight: 'limit', field: 'limitUnbound_uM', fact: 'unbound_uM', atInterval: false },
  { key: 'freeMetal', label: 'Free metal in the batch', unit: '', bound: 'atMost', weight: 'limit', field: 'limitFreeMetal_frac', fact: 'freeMetal_frac', atInterval: false },
  { key: 'freeMetalWarning', label: 'Free metal in the batch, warning', unit: '', bound: 'atMost', weight: 'warning', field: 'warnFreeMetal_frac', fact: 'freeMetal_frac', atInterval: false },
  { key: 'pM', label: 'pM', unit: '', bound: 'atLeast', weight: 'warning', field: 'warnPM', fact: 'pM', atInterval: false },
  { key: 'zincPhosphate', label: 'Zinc–phosphate ratio at 72 h', unit: '', bound: 'atLeast', weight: 'warning', field: 'warnZincPhosphateRatio', fact: 'zincPhosphateRatio', atInterval: false },
  { key: 'boundAtEquilibrium', label: 'Bound at equilibrium', unit: '', bound: 'atLeast', weight: 'warning', field: 'warnBoundAtEquilibrium_frac', fact: 'boundAtEquilibrium_frac', atInterval: false },
  { key: 'ratio', label: 'r2/r1', unit: '', bound: 'atMost', weight: 'limit', field: 'limitRatioR2R1', fact: 'ratioR2R1', atInterval: false },
]

/** A value that is itself a bound decides only when it lies on the right side: "below 5" says nothing about a limit of 3. */
export function outcomeOf(quantity: PlacedQuantity | null, limit: number, declaration: Pick<LimitDeclaration, 'bound' | 'atInterval'>): LimitOutcome {
  if (quantity === null) return 'not known'
  const atMost = declaration.bound === 'atMost'
  const end = declaration.atInterval && quantity.interval !== null ? quantity.interval[atMost ? 1 : 0] : quantity.value
  if (quantity.kind === '=') return (atMost ? end <= limit : end >= limit) ? 'within' : 'over'
  if (quantity.kind === '<') return atMost ? (quantity.value <= limit ? 'within' : 'not known') : (quantity.value <= limit ? 'over' : 'not known')
  return atMost ? (quantity.value >= limit ? 'over' : 'not known') : (quantity.value >= limit ? 'within' : 'not known')
}

/** Every limit of the profile judged on one agent. r2/r1 is asked of T1 agents only. */
export function judgeLimits(facts: LimitFacts, profile: ScreeningProfile, mechanism: 'T1' | 'T2' | 'CEST'): JudgedLimit[] {
  return LIMITS.filter(limit => limit.key !== 'ratio' || mechanism === 'T1').map((limit) => {
    const quantity = facts[limit.fact]
    return {
      key: limit.key, label: limit.label, unit: limit.unit, bound: limit.bound, weight: limit.weight, limit: profile[limit.field],
      value: quantity?.value ?? null, outcome: outcomeOf(quantity, profile[limit.field], limit), evidenceIds: quantity?.evidenceIds ?? [],
    }
  })
}

/** No limit (warnings aside) that could be judged is over. */
export function withinAll(limits: readonly JudgedLimit[]): boolean {
  return limits.every(limit => limit.weight === 'warning' || limit.outcome !== 'over')
}
