import type { NamedQuantity } from '../../evidence/quantity'
import { disagreements } from '../../science/exchange/rateFlags'
import { logInterval } from '../../science/kinetics/firstOrder'
import { inverseVarianceMean } from '../../science/statistics'
import type { AnalysisInput, Flag, SeriesResult } from '../types'
import { byGlobalFit } from './globalMethod'
import { METHOD_IDS, METHOD_TITLES, methodOf, SAMPLE_METHODS, type MethodDone, type MethodId, type MethodOutcome } from './methods'
import { poolOf, type Sample } from './samples'
import { numberOr } from './scans'

/** Samples at one pH and temperature, with what every method says of each. */
export interface RateGroup {
  readonly pH: number | null
  readonly temperature_K: number | null
  readonly samples: readonly Sample[]
  /** One outcome for each sample, or one for all of them by a global fit; absent where a method was not asked for. */
  readonly methods: Readonly<Partial<Record<MethodId, readonly MethodOutcome[]>>>
}

/** An exchange rate of a group by one method. */
export interface GroupRate { readonly method: MethodId, readonly k: NamedQuantity, readonly samples: number, readonly done: readonly { readonly sample: Sample, readonly result: MethodDone }[] }

/** @param modelId the method chosen: a second pool is fitted only then */
export function groupsOf(samples: readonly Sample[], { conditions, modelId }: Pick<AnalysisInput, 'conditions' | 'modelId'>): RateGroup[] {
  const groups = new Map<string, Sample[]>()
  for (const one of samples) {
    const key = JSON.stringify([one.facts.pH, one.facts.temperature_K])
    groups.set(key, [...groups.get(key) ?? [], one])
  }
  const facts = { field_T: numberOr(conditions.b0_T) ?? NaN, protons: numberOr(conditions.protons) }
  return [...groups.values()].map(own => ({
    pH: own[0]!.facts.pH, temperature_K: own[0]!.facts.temperature_K, samples: own,
    methods: {
      ...Object.fromEntries(SAMPLE_METHODS.map(id => [id, own.map(sample => methodOf(id, sample))])), global: [byGlobalFit(own, poolOf(conditions), { ...facts, solutes: 1 })],
      ...(modelId === 'globalTwo' ? { globalTwo: [byGlobalFit(own, poolOf(conditions), { ...facts, solutes: 2 })] } : {}),
    },
  }))
}

/**
 * The rate of a group by one method: that of its sample, or the mean of several by inverse variances, widened by their scatter; the error of B1, which samples share, is added after.
 * Null where the method says nothing of any sample.
 */
export function rateOf(group: RateGroup, method: MethodId): GroupRate | null {
  const done = (group.methods[method] ?? []).flatMap((result, i) => result.ok ? [{ sample: group.samples[i]!, result }] : [])
  const first = done[0]
  if (first === undefined) return null
  const name = (value: number, se: number | null, interval: readonly [number, number] | null): NamedQuantity => ({ name: 'kex_per_s', label: 'k_{ex}', unit: 's^-1', value, kind: '=', se, interval: interval && [interval[0], interval[1]], evidenceId: null })
  const { k_per_s: k } = first.result
  if (done.length === 1) return { method, k: name(k.value, k.se, k.interval), samples: group.methods[method]!.length === 1 ? group.samples.length : 1, done }
  const own = done.map(({ result }) => result.k_per_s.se === null ? null : Math.sqrt(Math.max(0, result.k_per_s.se ** 2 - result.b1Se_per_s ** 2)))
  const values = done.map(({ result }) => result.k_per_s.value)
  if (!own.every((se): se is number => se !== null && se > 0)) return { method, k: name(values.reduce((sum, value) => sum + value, 0) / values.length, null, null), samples: done.length, done }
  const { mean, se, chi2 } = inverseVarianceMean(values, own)
  const b1 = mean * Math.max(...done.map(({ result }) => result.b1Se_per_s / result.k_per_s.value))
  const whole = Math.hypot(se * Math.sqrt(Math.max(1, chi2 / (values.length - 1))), b1)
  return { method, k: name(mean, whole, logInterval(mean, whole)), samples: done.length, done }
}

/** '±' only where there is an error. */
const written = ({ value, se }: NamedQuantity): string => `${value.toPrecision(4)}${se === null ? '' : ` ± ${se.toPrecision(2)}`} s⁻¹`

export const groupLabel = ({ pH, temperature_K }: RateGroup): string => [pH === null ? null : `pH ${pH}`, temperature_K === null ? null : `${Number((temperature_K - 273.15).toFixed(1))} °C`].filter(part => part !== null).join(', ')

/** Series result of the method chosen: the rate of the group with most spectra first, rates of other groups after it, all methods in the statistics. */
export function seriesOf(input: AnalysisInput, groups: readonly RateGroup[], chosen: readonly { group: RateGroup, rate: GroupRate }[]): { series: SeriesResult, flags: Flag[] } {
  const [head] = chosen as [typeof chosen[number]]
  const result = head.rate.done[0]!.result
  const ratios = head.rate.done.flatMap(({ sample, result: one }) => one.protonRatio === null ? [] : [{ sample, ratio: one.protonRatio }])
  const others = chosen.slice(1).map(({ group, rate }): NamedQuantity => ({ ...rate.k, name: `kex_per_s@${groupLabel(group)}`, label: `k_{ex}, ${groupLabel(group)}` }))
  const parameters: NamedQuantity[] = [
    rate0(head.rate.k, groups.length > 1 ? groupLabel(head.group) : null), ...others,
    ...ratios.map(({ sample, ratio }): NamedQuantity => ({ name: `protonRatio@${sample.label}`, label: `Protons, fitted over typed${ratios.length > 1 ? `, ${sample.label}` : ''}`, unit: '', value: ratio.value, kind: '=', se: ratio.se, interval: null, evidenceId: null })),
  ]
  const points = input.tubes.length === 0 ? [] : head.rate.done.flatMap(({ result: one }) => one.points.map(({ tubeNo, label, x, y, ySe, fitted }) => ({ tubeNo, label, x, y, ySe, fitted, studentised: null, cook: null, leaveOneOut: null, excluded: null })))
  return {
    series: { headline: head.rate.k, parameters, points, line: [...result.line], band: [], axes: result.axes, statistics: groups.flatMap(group => sideBySide(group, groups.length > 1)) },
    flags: [...chosen.flatMap(({ rate }) => methodFlags(rate)), ...groups.flatMap(group => disagreementFlags(group, groups.length > 1))],
  }
}

const rate0 = (k: NamedQuantity, of: string | null): NamedQuantity => of === null ? k : { ...k, label: `${k.label}, ${of}` }

/** Every method of a group in a line: its rate and what it assumes, or why it says nothing. */
function sideBySide(group: RateGroup, isOneOfMany: boolean): SeriesResult['statistics'] {
  return METHOD_IDS.filter(id => group.methods[id] !== undefined).map((id) => {
    const rate = rateOf(group, id)
    const label = isOneOfMany ? `${METHOD_TITLES[id]}, ${groupLabel(group)}` : METHOD_TITLES[id]
    if (rate === null) {
      const why = group.methods[id]!.find(one => !one.ok)
      return { label, value: null, text: why && !why.ok ? `${why.message} Needed: ${why.accepted}` : '' }
    }
    return { label, value: rate.k.value, text: `k = ${written(rate.k)}. ${rate.done[0]!.result.assumptions}` }
  })
}

function methodFlags({ done, method }: GroupRate): Flag[] {
  const all = done.flatMap(({ sample, result }) => result.flags.map(flag => ({ ...flag, tubeNo: null, sentence: done.length > 1 ? `${sample.label}: ${flag.sentence}` : flag.sentence })))
  return all.filter((flag, i) => all.findIndex(other => other.id === flag.id) === i).map(flag => ({ ...flag, title: `${flag.title} (${METHOD_TITLES[method]})` }))
}

/** Methods that differ beyond their errors, in one flag. */
function disagreementFlags(group: RateGroup, isOneOfMany: boolean): Flag[] {
  const rates = METHOD_IDS.flatMap((id) => {
    const rate = rateOf(group, id)
    return rate === null ? [] : [{ method: METHOD_TITLES[id], k_per_s: { value: rate.k.value, se: rate.k.se } }]
  })
  const found = disagreements(rates)
  if (found.length === 0) return []
  return [{ id: 'methodsDisagree', title: 'Methods disagree', tubeNo: null, sentence: `${isOneOfMany ? `${groupLabel(group)}: ` : ''}${found.slice(0, 2).map(one => one.sentence).join(' ')}${found.length > 2 ? ` ${found.length - 2} more pairs differ.` : ''}` }]
}
