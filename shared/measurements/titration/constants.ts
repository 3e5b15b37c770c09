import type { NamedQuantity } from '../../evidence/quantity'
import type { CorrelationTable } from '../types'
import { studentFactor } from '../../science/least-squares/line'
import type { RefinedSystem } from './refined'
import { protonated } from './system'

/** A constant as the trade writes it, made of log β: `plus` less `minus`. */
interface Spec { readonly name: string, readonly label: string, readonly plus: string, readonly minus: string | null }

const protonStep = (j: number): string => `protonStep${j}`
export const isProtonStep = (name: string): boolean => /^protonStep\d+$/.test(name)

/** Constants in the form of records: stepwise, the hydroxo complex as ML = ML(OH) + H. */
function constantSpecs(protons: number): Spec[] {
  return [
    { name: 'logK', label: 'log K_{ML}', plus: 'ML', minus: null }, { name: 'logKMHL', label: 'log K of ML + H', plus: 'MHL', minus: 'ML' }, { name: 'logKMLOH', label: 'log K of ML = ML(OH) + H', plus: 'MLOH', minus: 'ML' },
    ...Array.from({ length: protons }, (_, i) => ({ name: protonStep(i + 1), label: `log K_{${i + 1}} of the ligand`, plus: protonated(i + 1), minus: i === 0 ? null : protonated(i) })),
  ]
}

/** Value, error and how it was come by of every constant in the system, with those that are only bounded. */
export function constantsOf(done: RefinedSystem, protons: number): NamedQuantity[] {
  const logBeta = (name: string) => done.system.species.find(one => one.name === name)?.logBeta ?? null
  return constantSpecs(protons).flatMap((spec) => {
    const bounded = done.open.find(one => one.name === spec.plus)
    const parent = spec.minus === null ? 0 : logBeta(spec.minus)
    if (parent === null) return []
    if (bounded && bounded.kind !== 'none' && !(spec.plus.startsWith('H') && logBeta(spec.plus) !== null)) return [{ ...named(spec, bounded.bound - parent), kind: bounded.kind }]
    const own = logBeta(spec.plus)
    if (own === null) return []
    const se = stepSe(done, spec)
    if (se === null) return [{ ...named({ ...spec, label: done.fit.constants.some(one => one.name === spec.plus) ? spec.label : `${spec.label}, held` }, own - parent) }]
    const half = se * studentFactor(0.95, (done.fit.reducedChi2 ?? 1) > 1 ? done.fit.dof : null)
    return [{ ...named(spec, own - parent), se, interval: [own - parent - half, own - parent + half] as [number, number] }]
  })
}

const named = ({ name, label }: Spec, value: number): NamedQuantity => ({ name, label, unit: '', value, kind: '=', se: null, interval: null, evidenceId: null })

/** Standard error of a difference of log β; null where neither is refined or no errors exist. */
function stepSe({ fit }: RefinedSystem, { plus, minus }: Spec): number | null {
  const gradient = new Map([[plus, 1], ...(minus === null ? [] : [[minus, -1] as const])])
  return fit.constants.some(one => one.name === plus) ? combinedSe(fit, gradient) : null
}

/** Standard error of a sum of refined log β, each times its factor; held ones are exact. null without errors. */
export function combinedSe(fit: RefinedSystem['fit'], factors: ReadonlyMap<string, number>): number | null {
  const { covariance } = fit
  if (covariance === null) return null
  const g = fit.constants.map(one => factors.get(one.name) ?? 0)
  const variance = g.reduce((sum, a, i) => sum + g.reduce((inner, b, j) => inner + a * b * covariance[i]![j]!, 0), 0)
  return variance >= 0 ? Math.sqrt(variance) : null
}

/** Correlations of the refined log β; null where no errors exist. */
export function correlationTable({ fit }: RefinedSystem): CorrelationTable | null {
  if (fit.correlation === null) return null
  const names = fit.constants.map(one => one.name)
  return { names, labels: names.map(name => `log β(${name.replace('MLOH', 'ML(OH)').replace(/H(\d)/, 'H_$1')})`), matrix: fit.correlation.map(row => [...row]) }
}
