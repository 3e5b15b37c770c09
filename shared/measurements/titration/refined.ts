import { judgeConstants, type Determined } from '../../science/titration/determinable'
import type { TitrationCurve } from '../../science/titration/curves'
import { refineConstants, type Refinement, type TitrationSystem } from '../../science/titration/refine'
import { withComplexAt, withValues, type PlannedSystem, type Refusal } from './system'

export interface RefinedSystem {
  readonly ok: true
  /** As refined at last: log β of every species, refined ones at their optimum. */
  readonly system: TitrationSystem
  readonly fit: Refinement
  /** Constants that the curves bound or say nothing of; every one but ML is taken out of the refinement. */
  readonly open: readonly Exclude<Determined, { kind: '=' }>[]
}

/** log K at which the search for ML begins where nothing is typed: from a weak to a very strong complex, so that one lies within reach of the optimum. */
const GRID = [3, 6, 9, 12, 15, 18, 21, 24, 27, 30] as const

/** Refines, tells what the curves determine, and refines again without what they do not. */
export function refineSystem(planned: PlannedSystem, curves: readonly TitrationCurve[]): RefinedSystem | Refusal {
  const start = planned.isOpen ? nearest(planned.system, curves) : planned.system
  const first = refineConstants(start, curves)
  if (!first.ok) return first
  if (!first.converged) return NOT_CONVERGED
  const at = withValues(start, valuesOf(first))
  const judged = judgeConstants(at, curves)
  if ('ok' in judged) return judged
  const open = judged.filter(one => one.kind !== '=')
  const drop = open.filter(one => one.name !== 'ML')
  if (drop.length === 0) return { ok: true, system: at, fit: first, open }
  return again({ start, at, open }, new Set(drop.map(one => one.name)), curves)
}

const NOT_CONVERGED: Refusal = { ok: false, reason: 'notConverged', message: 'The refinement found no least sum.', accepted: 'starting constants within a few units, fewer species, or amounts that agree with the curves' }

/** Without the complexes that nothing shows; protonation constants that nothing shows stay where they were typed. */
function again({ start, at, open }: { start: TitrationSystem, at: TitrationSystem, open: RefinedSystem['open'] }, dropped: ReadonlySet<string>, curves: readonly TitrationCurve[]): RefinedSystem | Refusal {
  const isLigand = (name: string) => start.species.some(one => one.name === name && one.stoichiometry.M === undefined)
  const typed = new Map(start.species.filter(one => dropped.has(one.name)).map(one => [one.name, one.logBeta]))
  const rest = withValues(at, typed, at.refine.filter(name => !dropped.has(name)))
  const system: TitrationSystem = { ...rest, species: rest.species.filter(one => !dropped.has(one.name) || isLigand(one.name)) }
  if (system.refine.length === 0) return { ok: false, reason: 'notDeterminable', message: 'The curves determine none of the constants that were to be refined.', accepted: 'points where the species in question form, or other constants to refine' }
  const fit = refineConstants(system, curves)
  if (!fit.ok) return fit
  return fit.converged ? { ok: true, system: withValues(system, valuesOf(fit)), fit, open } : NOT_CONVERGED
}

const valuesOf = (fit: Refinement): ReadonlyMap<string, number> => new Map(fit.constants.map(one => [one.name, one.logBeta]))

/** The start of ML from which the least sum is reached, everything else as it stands. */
function nearest(system: TitrationSystem, curves: readonly TitrationCurve[]): TitrationSystem {
  const coarse = curves.map((curve): TitrationCurve => curve.kind === 'volumetric' ? { ...curve, refineAcid: false } : curve)
  let best = system
  let least = Infinity
  for (const logK of GRID) {
    const there = withComplexAt(system, logK)
    const fit = refineConstants({ ...there, refine: ['ML'] }, coarse)
    if (!fit.ok || !(fit.chi2 < least)) continue
    least = fit.chi2
    best = withComplexAt(there, fit.constants[0]!.logBeta)
  }
  return best
}
