/**
 * The working concentration: how much of an agent gives the contrast the profile asks for.
 * T1 and T2 agents: C_w = ΔR/r at the profile's condition. CEST agents bring it as evidence of their detection model.
 */
import { logInterval } from '../kinetics/firstOrder'
import { nearestItems, targetOf } from './matching'
import { poolItems, type Pooled } from './pool'
import { factOf, itemsOf, rootSumSquares, type EvidenceIndex } from './read'
import type { ScreeningProfile } from './profile'
import type { EvidenceItem, Mechanism, MissingItem, PlacedQuantity, SplitMark } from './types'

export interface WorkingConcentration {
  readonly quantity: PlacedQuantity
  /** The pooled relaxivity (or, for CEST, concentration) behind it. */
  readonly pooled: Pooled
  /** −1: C_w is inverse to the pooled value; +1: it is the pooled value. */
  readonly power: -1 | 1
  readonly split: readonly SplitMark[]
  /** False where one of the measurements does not state its pH. */
  readonly pHStated: boolean
}

interface Source {
  readonly quantity: string
  readonly label: string
  readonly target_per_s: number | null
}

function sourceOf(mechanism: Mechanism, profile: ScreeningProfile): Source {
  if (mechanism === 'T1') return { quantity: 'r1_per_mM_s', label: 'r1', target_per_s: profile.deltaRate1_per_s }
  if (mechanism === 'T2') return { quantity: 'r2_per_mM_s', label: 'r2', target_per_s: profile.deltaRate2_per_s }
  return { quantity: 'workingConcentration_mM', label: 'working concentration from the detection model', target_per_s: null }
}

/** C_w of an agent under a profile, or what is missing for it. */
export function workingConcentration(index: EvidenceIndex, mechanism: Mechanism, profile: ScreeningProfile): { readonly ok: true, readonly working: WorkingConcentration } | { readonly ok: false, readonly missing: MissingItem } {
  const source = sourceOf(mechanism, profile)
  const all = itemsOf(index, source.quantity)
  const pooled = poolItems(nearestItems(all, targetOf(profile)))
  if (pooled === null) return { ok: false, missing: missingText(source, profile, all.length) }
  const toConcentration = (value: number): number => (source.target_per_s === null ? value : source.target_per_s / value)
  const inverse = source.target_per_s !== null
  const value = toConcentration(pooled.value)
  const se = pooled.se === null ? null : value * pooled.se / pooled.value
  const working: WorkingConcentration = {
    quantity: {
      value, kind: inverse ? flip(pooled.kind) : pooled.kind, se, interval: se === null ? null : logInterval(value, se), unit: 'mM',
      evidenceIds: pooled.items.map(item => item.id), label: 'Working concentration', carried: false,
    },
    pooled, power: inverse ? -1 : 1,
    split: pooled.disagree ? pooled.items.map(item => ({ workingConc_mM: toConcentration(item.value), evidenceIds: [item.id] })) : [],
    pHStated: pooled.items.every(item => factOf(item, 'pH') !== null),
  }
  return { ok: true, working }
}

const flip = (kind: '=' | '<' | '>'): '=' | '<' | '>' => (kind === '<' ? '>' : kind === '>' ? '<' : '=')

function missingText(source: Source, profile: ScreeningProfile, elsewhere: number): MissingItem {
  const celsius = (profile.temperature_K - 273.15).toFixed(1)
  const condition = `in ${profile.medium} at ${profile.b0_T} T, ${celsius} °C, pH ${profile.pH}`
  const rest = elsewhere === 0 ? 'not measured' : `measured ${elsewhere === 1 ? 'once' : `${elsewhere} times`}, but not within 2 K, 5 % of the field and 0.2 pH of that`
  return { key: 'concentration', what: `${source.label} ${condition}: ${rest}`, whoCanMeasure: 'chemist, with a phantom series for the physicist to sign' }
}

export interface RelaxivityRatio {
  readonly value: number
  readonly se: number | null
  readonly items: readonly EvidenceItem[]
}

/**
 * r2/r1 at the profile's condition; null unless both are measured there. A scale error that both share cancels.
 */
export function relaxivityRatio(index: EvidenceIndex, profile: ScreeningProfile): RelaxivityRatio | null {
  const [r1, r2] = ['r1_per_mM_s', 'r2_per_mM_s'].map(quantity => poolItems(nearestItems(itemsOf(index, quantity), targetOf(profile))))
  if (!r1 || !r2 || r1.kind !== '=' || r2.kind !== '=') return null
  const value = r2.value / r1.value
  const items = [...r1.items, ...r2.items]
  if (r1.ownRelative === null || r2.ownRelative === null) return { value, se: null, items }
  const scales = new Map<string, number>(r2.scales.map(part => [part.groupId, part.relative]))
  for (const part of r1.scales) scales.set(part.groupId, (scales.get(part.groupId) ?? 0) - part.relative)
  return { value, se: value * rootSumSquares(r1.ownRelative, r2.ownRelative, ...scales.values()), items }
}
