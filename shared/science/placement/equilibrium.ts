/** From log K evidence to pM and to the fraction still bound at equilibrium in the profile's plasma model. */
import { boundInPlasma, plasmaBackground, type BoundInPlasma } from '../equilibria/boundInPlasma'
import { pMWithError } from '../equilibria/conditional'
import { PLASMA_COMPETITORS, type PlasmaCompetitor } from '../equilibria/media'
import { logInterval } from '../kinetics/firstOrder'
import { factOf, itemsOf, newestOf, placedFrom, textOf, Z_95, type EvidenceIndex } from './read'
import type { PlacementCache } from './cache'
import type { ScreeningProfile } from './profile'
import type { EvidenceItem, PlacedQuantity, PlacementFlag, ValueKind } from './types'

export interface EquilibriumPlacement {
  readonly pM: PlacedQuantity | null
  readonly bound_frac: PlacedQuantity | null
  readonly plasma: BoundInPlasma | null
  readonly items: readonly EvidenceItem[]
  readonly flags: readonly PlacementFlag[]
}

/** Constants of one ligand with its lanthanide, and what follows from them whatever the profile. */
export interface LigandFacts {
  readonly item: EvidenceItem
  readonly protonation: readonly number[]
  readonly competitors: Partial<Record<PlasmaCompetitor, number>>
  readonly items: readonly EvidenceItem[]
  readonly pM: PlacedQuantity
  /** Names the constants, for the cache. */
  readonly key: string
}

const isCompetitor = (metal: string | null): metal is PlasmaCompetitor => PLASMA_COMPETITORS.includes(metal as PlasmaCompetitor)

/** Stepwise protonation constants: with the log K, or as items of their own (metal H, step 1 …). Null where not known. */
function protonationOf(item: EvidenceItem, all: readonly EvidenceItem[]): { values: readonly number[], items: readonly EvidenceItem[] } | null {
  const own = item.parameters?.protonation
  if (Array.isArray(own) && own.length > 0 && own.every(Number.isFinite)) return { values: own as readonly number[], items: [] }
  const steps = all.filter(other => textOf(other, 'metal') === 'H' && factOf(other, 'step') !== null)
  const found: EvidenceItem[] = []
  for (let step = 1; ; step++) {
    const one = newestOf(steps.filter(other => factOf(other, 'step') === step))
    if (one === null) break
    found.push(one)
  }
  return found.length === 0 ? null : { values: found.map(one => one.value), items: found }
}

/** log K of the lanthanide with its ligand's protonation and what is known of competitors; null where either is missing. */
function ligandFacts(index: EvidenceIndex): LigandFacts | null {
  const all = itemsOf(index, 'logK')
  const metalOf = (item: EvidenceItem): string | null => textOf(item, 'metal')
  const item = newestOf(all.filter(one => !isCompetitor(metalOf(one)) && metalOf(one) !== 'H'))
  if (item === null) return null
  const protonation = protonationOf(item, all)
  if (protonation === null) return null
  const competitors: Partial<Record<PlasmaCompetitor, number>> = {}
  const used = [item, ...protonation.items]
  for (const metal of PLASMA_COMPETITORS) {
    const one = newestOf(all.filter(other => metalOf(other) === metal && other.kind === '='))
    if (one === null) continue
    competitors[metal] = one.value
    used.push(one)
  }
  return {
    item, protonation: protonation.values, competitors, items: used,
    pM: placedPM(item, protonation.values), key: JSON.stringify([item.value, protonation.values, competitors]),
  }
}

function cachedLigand(index: EvidenceIndex, cache: PlacementCache): LigandFacts | null {
  const known = cache.ligands.get(index) ?? ligandFacts(index) ?? 'none'
  cache.ligands.set(index, known)
  return known === 'none' ? null : known
}

/** Everything that equilibrium says of an agent under a profile. Values given as evidence serve where nothing can be worked out. */
export function equilibriumPlacement(index: EvidenceIndex, profile: ScreeningProfile, cache: PlacementCache): EquilibriumPlacement {
  const ligand = cachedLigand(index, cache)
  const [pMItem, boundItem] = ['pM', 'boundAtEquilibrium_frac'].map(quantity => newestOf(itemsOf(index, quantity)))
  // a pM that was emitted with its record carries the errors of the protonation constants too
  const pM = placedFrom(pMItem!, 'pM (pH 7.4, 1 µM metal, 10 µM ligand)') ?? ligand?.pM ?? null
  const mixed = pMItem?.parameters?.mixedMedia === true ? textOf(pMItem, 'mediumNote') : null
  const flags: PlacementFlag[] = mixed ? [{ id: 'mediumAssumed', sentence: mixed }] : []
  const given = [pMItem!, boundItem!].filter(item => item !== null)
  if (ligand === null) return { pM, bound_frac: placedFrom(boundItem!, 'Bound at equilibrium'), plasma: null, items: given, flags }
  const plasma = solvePlasma(ligand, profile, cache)
  if (plasma && plasma.leftOut.length) flags.push({ id: 'competitorsLeftOut', sentence: `Equilibrium in plasma: no log K for ${plasma.leftOut.join(', ')}; left out, so less may stay bound.` })
  return { pM, bound_frac: plasma && placedBound(ligand, plasma), plasma, items: [...ligand.items, ...(pMItem ? [pMItem] : [])], flags }
}

function placedPM(item: EvidenceItem, protonation: readonly number[]): PlacedQuantity {
  const se = item.se ?? (item.interval === null ? null : (item.interval[1] - item.interval[0]) / (2 * Z_95))
  const { value, se: pMSe } = pMWithError(
    { logK: item.value, ligandProtonation: protonation },
    se === null || item.kind !== '=' ? null : { logK_se: se, ligandProtonation_se: protonation.map(() => 0) },
  )
  return {
    value, kind: item.kind, se: pMSe, interval: pMSe === null ? null : [value - Z_95 * pMSe, value + Z_95 * pMSe],
    unit: '', evidenceIds: [item.id], label: 'pM (pH 7.4, 1 µM metal, 10 µM ligand)', carried: false,
  }
}

function solvePlasma(ligand: LigandFacts, profile: ScreeningProfile, cache: PlacementCache): BoundInPlasma | null {
  const totals = {
    ca_mM: profile.plasmaCa_mM, mg_mM: profile.plasmaMg_mM, zn_uM: profile.plasmaZn_uM, cu_uM: profile.plasmaCu_uM, phosphate_mM: profile.plasmaPhosphate_mM,
    carbonate_mM: profile.plasmaCarbonate_mM, citrate_mM: profile.plasmaCitrate_mM, lactate_mM: profile.plasmaLactate_mM, histidine_mM: profile.plasmaHistidine_mM, albumin_mM: profile.plasmaAlbumin_mM,
  }
  const conditions = { totals, pcH: profile.pH, agent_mM: profile.agentInPlasma_mM }
  const place = [profile.pH, ...Object.values(totals)].join(' ')
  const key = `${ligand.key} ${profile.agentInPlasma_mM} ${place}`
  let known = cache.plasma.get(key)
  if (known === undefined) {
    const background = cache.backgrounds.get(place) ?? plasmaBackground(conditions)
    cache.backgrounds.set(place, background)
    known = boundInPlasma({ logK: ligand.item.value, ligandProtonation: ligand.protonation, logKCompetitors: ligand.competitors }, conditions, background)
  }
  cache.plasma.set(key, known)
  return known.ok ? known : null
}

/** A bound on log K bounds the fraction the same way; a competitor left out makes it an upper bound. Both against each other: not known. */
function placedBound({ item, items }: LigandFacts, plasma: BoundInPlasma): PlacedQuantity | null {
  if (item.kind === '>' && plasma.kind === '<') return null
  const kind: ValueKind = item.kind === '=' ? plasma.kind : item.kind
  return { value: plasma.bound_frac, kind, se: null, interval: null, unit: '', evidenceIds: items.map(one => one.id), label: 'Bound at equilibrium in the plasma model', carried: false }
}

/** Zinc–phosphate ratio and acid half-life, which are records of their own and never turned into a loss. */
export function recordQuantities(index: EvidenceIndex): { readonly zincPhosphateRatio: PlacedQuantity | null, readonly acidHalfLife_s: PlacedQuantity | null, readonly items: readonly EvidenceItem[] } {
  const ratio = newestOf(itemsOf(index, 'zincPhosphateRatio'))
  const half = newestOf(itemsOf(index, 'halfLifeAcid_s'))
  const acid = placedFrom(half, 'Half-life in acid')
  return {
    zincPhosphateRatio: placedFrom(ratio, 'Zinc–phosphate ratio at 72 h'),
    acidHalfLife_s: acid && acid.interval === null && acid.se !== null ? { ...acid, interval: logInterval(acid.value, acid.se) } : acid,
    items: [ratio, half].filter((item): item is EvidenceItem => item !== null),
  }
}
