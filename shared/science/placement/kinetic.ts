/** From rate-law evidence to the dissociation rate and the loss under a profile. */
import { halfLifeOf } from '../kinetics/firstOrder'
import { evaluateRateLaw, type RateConstant, type RateLaw, type RateResult } from '../kinetics/rateLaw'
import { RATE_CONSTANT_NAMES, RATE_TERMS, rateFormOf, type CompetitorMetal, type RateConditions, type RateConstantName, type SumConstant } from '../kinetics/rateTerms'
import { lossOf, type Residence } from './loss'
import { factOf, itemsOf, textOf, Z_95, type EvidenceIndex } from './read'
import type { ScreeningProfile } from './profile'
import type { EvidenceItem, PlacedQuantity, PlacementFlag } from './types'

export interface KineticPlacement {
  readonly law: RateLaw
  readonly rate: RateResult
  readonly items: readonly EvidenceItem[]
  readonly kd_per_s: PlacedQuantity
  readonly halfLife_s: PlacedQuantity
  readonly loss_frac: PlacedQuantity
  readonly flags: readonly PlacementFlag[]
}

export function residenceOf(profile: ScreeningProfile): Residence {
  return { eliminationHalfLife_s: profile.eliminationHalfLife_s, slowShare_frac: profile.slowShare_frac, slowHalfLife_s: profile.slowHalfLife_s }
}

export function rateConditionsOf(profile: ScreeningProfile): RateConditions {
  return {
    pH: profile.pH, temperature_K: profile.temperature_K,
    competitors_M: { Zn: profile.exchangeableZn_uM / 1e6, Cu: profile.exchangeableCu_uM / 1e6, Ca: profile.exchangeableCa_mM / 1e3 },
  }
}

/** The form that a constant belongs to: as stated, or by its name; null for k0, which both forms have. */
function formOfItem(name: RateConstantName, item: EvidenceItem): 'sum' | 'saturation' | null {
  const stated = textOf(item, 'form')
  if (stated === 'sum' || stated === 'saturation') return stated
  return name === 'k0_per_s' ? null : rateFormOf([name])
}

/**
 * The item of each constant that counts: nearest to the profile's temperature, of those the newest. Constants of the two forms mean different
 * things and are never mixed: the form of the newest item decides.
 */
function constantsOf(index: EvidenceIndex, profile: ScreeningProfile): Map<RateConstantName, EvidenceItem> {
  const all = RATE_CONSTANT_NAMES.flatMap(name => itemsOf(index, name).map(item => ({ name, item, form: formOfItem(name, item) })))
  const newest = all.filter(one => one.form !== null).reduce<(typeof all)[number] | null>((best, one) => (best === null || one.item.id > best.item.id ? one : best), null)
  const chosen = new Map<RateConstantName, EvidenceItem>()
  for (const name of RATE_CONSTANT_NAMES) {
    const items = all.filter(one => one.name === name && (one.form === null || one.form === newest?.form)).map(one => one.item)
    const away = (item: EvidenceItem): number => Math.abs((factOf(item, 'temperature_K') ?? Infinity) - profile.temperature_K)
    const best = items.reduce<EvidenceItem | null>((kept, item) => (kept === null || away(item) < away(kept) || (away(item) === away(kept) && item.id > kept.id) ? item : kept), null)
    if (best) chosen.set(name, best)
  }
  return chosen
}

function toConstant(name: RateConstantName, item: EvidenceItem): RateConstant {
  const pH = factOf(item, 'pH')
  return {
    name, value: item.value, kind: item.kind, se: item.se ?? (item.interval === null ? null : (item.interval[1] - item.interval[0]) / (2 * Z_95)),
    temperature_K: factOf(item, 'temperature_K'),
    enthalpy_kJ_per_mol: factOf(item, 'enthalpy_kJ_per_mol'), enthalpy_se_kJ_per_mol: factOf(item, 'enthalpy_se_kJ_per_mol'),
    pHMin: factOf(item, 'pHMin') ?? pH, pHMax: factOf(item, 'pHMax') ?? pH,
    evidenceId: item.id,
  }
}

/** Correlation of two items of one fit, as either of them states it. */
export function correlationOf(items: readonly EvidenceItem[]): (a: string, b: string) => number {
  const byId = new Map(items.map(item => [item.id, item.covarianceGroup]))
  return (a, b) => byId.get(a)?.correlation?.[b] ?? byId.get(b)?.correlation?.[a] ?? 0
}

/** The rate law of an agent from its evidence; null where it has no rate constant. */
export function rateLawOf(index: EvidenceIndex, profile: ScreeningProfile): { readonly law: RateLaw, readonly items: readonly EvidenceItem[] } | null {
  const chosen = constantsOf(index, profile)
  if (chosen.size === 0) return null
  const items = [...chosen.values()]
  const metal = items.map(item => textOf(item, 'metal')).find((m): m is CompetitorMetal => m === 'Zn' || m === 'Cu' || m === 'Ca')
  const groups = new Set(items.map(item => item.covarianceGroup?.id))
  const shared = groups.size === 1 ? items[0]!.covarianceGroup?.scaleFraction ?? 0 : 0
  return {
    law: {
      form: rateFormOf([...chosen.keys()]), constants: [...chosen].map(([name, item]) => toConstant(name, item)),
      correlation: correlationOf(items), sharedScale_frac: shared, ...(metal ? { metal } : {}),
    },
    items,
  }
}

/** Rate, half-life and loss of an agent; a refusal of the rate law comes back as its sentence. */
export function kineticPlacement(index: EvidenceIndex, profile: ScreeningProfile): { readonly ok: true, readonly kinetic: KineticPlacement } | { readonly ok: false, readonly message: string } {
  const found = rateLawOf(index, profile)
  if (found === null) return { ok: false, message: 'no rate constant is known' }
  const rate = evaluateRateLaw(found.law, rateConditionsOf(profile))
  if (!rate.ok) return { ok: false, message: rate.message }
  const carried = rate.terms.some(term => term.carried === 'carried') || (rate.decadesExtrapolated ?? 0) > 0
  const base = { evidenceIds: rate.evidenceIds, carried }
  return {
    ok: true,
    kinetic: {
      law: found.law, rate, items: found.items.filter(item => rate.evidenceIds.includes(item.id)),
      kd_per_s: { ...plain(rate), unit: 's^-1', label: 'Dissociation rate', ...base },
      halfLife_s: { ...halfLifeOf(rate), unit: 's', label: 'Half-life', ...base },
      loss_frac: { ...lossOf(rate, residenceOf(profile)), unit: '', label: 'Lets go before it is eliminated (model)', ...base },
      flags: flagsOf(found.law, rate, profile),
    },
  }
}

const plain = ({ value, kind, se, interval }: RateResult) => ({ value, kind, se, interval })

function flagsOf(law: RateLaw, rate: RateResult, profile: ScreeningProfile): PlacementFlag[] {
  const flags: PlacementFlag[] = []
  const celsius = (kelvin: number): string => `${(kelvin - 273.15).toFixed(1)} °C`
  const labels = (status: string): string => rate.terms.filter(t => t.carried === status).map(t => labelOf(t.name)).join(', ')
  if ((rate.decadesExtrapolated ?? 0) > 0) {
    flags.push({ id: 'extrapolatedPh', sentence: `Extrapolated: pH ${profile.pH} lies ${rate.decadesExtrapolated!.toFixed(1)} decades of [H+] outside the measured range.` })
  }
  const stayed = labels('notCarried')
  if (stayed) {
    const from = law.constants.filter(c => rate.terms.some(t => t.name === c.name && t.carried === 'notCarried')).map(c => celsius(c.temperature_K!))
    flags.push({ id: 'temperatureNotCarried', sentence: `${stayed}: measured at ${[...new Set(from)].join(', ')} and not carried to ${celsius(profile.temperature_K)}, because no activation enthalpy is known.` })
  }
  const moved = labels('carried')
  if (moved) flags.push({ id: 'temperatureCarried', sentence: `${moved}: carried to ${celsius(profile.temperature_K)} by the activation enthalpy.` })
  const unknown = labels('temperatureUnknown')
  if (unknown) flags.push({ id: 'noConditions', sentence: `${unknown}: the temperature of the measurement is not stated.` })
  if (rate.leftOut.length) flags.push({ id: 'missingRateTerm', sentence: `No constant for ${rate.leftOut.join(', ')}: the rate leaves ${rate.leftOut.length === 1 ? 'it' : 'them'} out.` })
  if (rate.kind !== '=') flags.push({ id: 'boundOnly', sentence: rate.kind === '<' ? 'The loss is known only as "at most".' : 'The loss is known only as "at least".' })
  return flags
}

function labelOf(name: RateConstantName): string {
  return name in RATE_TERMS ? RATE_TERMS[name as SumConstant].label : name.replace(/_per_.*/, '')
}
