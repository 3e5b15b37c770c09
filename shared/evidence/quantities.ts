import type { Dimension } from '../science/units'

/**
 * One kind of number that a fit or a record can say about an agent. label, base and sub carry the notation of shared/notation.ts.
 */
export interface EvidenceQuantity {
  /** Name with the stored unit as suffix: the key under which evidence is kept. */
  id: string
  label: string
  /** The symbol in two parts for screens: base 'r', sub '1'; sub '' where there is none. */
  base: string
  sub: string
  /** Unit as shown, in notation; '' for pure numbers. */
  unit: string
  dimension: Dimension
  /** Decimals to show where no standard error says better; significant digits for numbers that span decades. */
  digits: { kind: 'decimals' | 'significant', count: number }
  /** Which way is better for an agent, other things equal; null = neither. */
  better: 'higher' | 'lower' | null
  group: EvidenceGroup
  /** Condition or detail keys without which the number means nothing. */
  needs: readonly string[]
}

export const EVIDENCE_GROUPS = {
  relaxivity: 'Relaxivity',
  exchange: 'Exchange',
  equilibrium: 'Equilibrium',
  kinetics: 'Dissociation',
  formation: 'Formation',
  batch: 'Batch',
} as const
export type EvidenceGroup = keyof typeof EVIDENCE_GROUPS

export const defineEvidence = <const Q extends EvidenceQuantity>(quantity: Q): Q => quantity

const decimals = (count: number) => ({ kind: 'decimals', count }) as const
const significant = (count: number) => ({ kind: 'significant', count }) as const

const relaxivity = (id: string, sub: string, better: 'higher' | null) => defineEvidence({
  id, label: `Relaxivity r_${sub}`, base: 'r', sub, unit: 'mM^-1 s^-1', dimension: 'relaxivity', digits: decimals(2), better, group: 'relaxivity', needs: ['b0_T', 'temperature_K', 'medium'],
})
const firstOrder = (id: string, label: string, sub: string, better: 'higher' | 'lower') => defineEvidence({
  id, label, base: 'k', sub, unit: 's^-1', dimension: 'rate', digits: significant(2), better, group: 'kinetics', needs: ['temperature_K'],
})
const secondOrder = (id: string, label: string, sub: string) => defineEvidence({
  id, label, base: 'k', sub, unit: 'M^-1 s^-1', dimension: 'rateSecondOrder', digits: significant(2), better: 'lower', group: 'kinetics', needs: ['temperature_K'],
})
const thirdOrder = (id: string, label: string, sub: string) => defineEvidence({
  id, label, base: 'k', sub, unit: 'M^-2 s^-1', dimension: 'rateThirdOrder', digits: significant(2), better: 'lower', group: 'kinetics', needs: ['temperature_K'],
})
const perMolar = (id: string, label: string, sub: string) => defineEvidence({
  id, label, base: 'K', sub, unit: 'M^-1', dimension: 'none', digits: significant(2), better: null, group: 'kinetics', needs: ['temperature_K'],
})
const constantWith = (id: string, label: string, sub: string) => defineEvidence({ id, label, base: 'log K', sub, unit: '', dimension: 'none', digits: decimals(2), better: null, group: 'equilibrium', needs: ['metal'] })
const fraction = (id: string, label: string, better: 'higher' | 'lower', group: EvidenceGroup) => defineEvidence({
  id, label, base: label, sub: '', unit: '', dimension: 'fraction', digits: significant(2), better, group, needs: [],
})

/** Every kind of evidence; the order is that of an agent's page. */
export const EVIDENCE_QUANTITIES: Readonly<Record<string, EvidenceQuantity>> = Object.fromEntries([
  relaxivity('r1_per_mM_s', '1', 'higher'),
  relaxivity('r2_per_mM_s', '2', null),
  defineEvidence({ id: 'workingConcentration_mM', label: 'Working concentration', base: 'c', sub: 'w', unit: 'mM', dimension: 'concentration', digits: significant(2), better: 'lower', group: 'exchange', needs: ['b0_T'] }),
  defineEvidence({ id: 'kex_per_s', label: 'Exchange rate', base: 'k', sub: 'ex', unit: 's^-1', dimension: 'rate', digits: significant(2), better: null, group: 'exchange', needs: ['temperature_K', 'pH'] }),
  defineEvidence({ id: 'logK', label: 'log K', base: 'log K', sub: 'ML', unit: '', dimension: 'none', digits: decimals(2), better: 'higher', group: 'equilibrium', needs: ['metal'] }),
  ...(['Ca', 'Mg', 'Zn', 'Cu', 'Fe', 'Mn'] as const).map(metal => constantWith(`logK${metal}`, `log K with ${metal === 'Fe' ? 'Fe(III)' : metal === 'Mn' ? 'Mn(II)' : metal}`, `${metal}L`)),
  constantWith('logKLn', 'log K with another lanthanide', 'LnL'),
  constantWith('logKWithCitrate', 'log K of the metal with citrate', 'M,Cit'),
  constantWith('logKWithCarbonate', 'log K of the metal with carbonate', 'M,CO_3'),
  constantWith('logKWithHydrogenPhosphate', 'log K of the metal with hydrogen phosphate', 'M,HPO_4'),
  defineEvidence({ id: 'logKConditional', label: 'Conditional log K', base: 'log K', sub: 'cond', unit: '', dimension: 'none', digits: decimals(2), better: 'higher', group: 'equilibrium', needs: ['metal', 'pH'] }),
  defineEvidence({ id: 'pM', label: 'pM', base: 'pM', sub: '', unit: '', dimension: 'none', digits: decimals(1), better: 'higher', group: 'equilibrium', needs: ['metal', 'pH'] }),
  fraction('boundAtEquilibrium_frac', 'Still bound at equilibrium', 'higher', 'equilibrium'),
  firstOrder('k0_per_s', 'Spontaneous dissociation', '0', 'lower'),
  secondOrder('k1_per_M_s', 'Dissociation by one proton', '1'),
  thirdOrder('k2_per_M2_s', 'Dissociation by two protons', '2'),
  firstOrder('k1_per_s', 'Dissociation of the protonated complex', '1', 'lower'),
  firstOrder('k3_per_s', 'Dissociation of the dinuclear complex', '3', 'lower'),
  secondOrder('kZn_per_M_s', 'Exchange with zinc', 'Zn'),
  secondOrder('kCu_per_M_s', 'Exchange with copper', 'Cu'),
  secondOrder('kCa_per_M_s', 'Exchange with calcium', 'Ca'),
  thirdOrder('kZnH_per_M2_s', 'Exchange with zinc, protonated complex', 'ZnH'),
  thirdOrder('kCuH_per_M2_s', 'Exchange with copper, protonated complex', 'CuH'),
  perMolar('kProton_per_M', 'Protonation constant of the complex', 'H'),
  perMolar('kMetal_per_M', 'Constant of the dinuclear complex', 'M'),
  defineEvidence({ id: 'halfLifeAcid_s', label: 'Half-life in acid', base: 't', sub: '1/2', unit: 's', dimension: 'time', digits: significant(2), better: 'higher', group: 'kinetics', needs: ['temperature_K'] }),
  defineEvidence({ id: 'zincPhosphateRatio', label: 'Zinc-phosphate ratio at 72 h', base: 'R', sub: '1,72 h', unit: '', dimension: 'none', digits: decimals(2), better: 'higher', group: 'kinetics', needs: [] }),
  defineEvidence({ id: 'zincPhosphateTime080_s', label: 'Zinc-phosphate time to 0.80', base: 't', sub: '0.80', unit: 's', dimension: 'time', digits: significant(2), better: 'higher', group: 'kinetics', needs: [] }),
  fraction('intactInChallenge_frac', 'Intact in the challenge', 'higher', 'kinetics'),
  defineEvidence({ id: 'halfLifeChallenge_s', label: 'Half-life in the challenge', base: 't', sub: '1/2', unit: 's', dimension: 'time', digits: significant(2), better: 'higher', group: 'kinetics', needs: ['temperature_K'] }),
  defineEvidence({ id: 'kOH_per_M_s', label: 'Formation with hydroxide', base: 'k', sub: 'OH', unit: 'M^-1 s^-1', dimension: 'rateSecondOrder', digits: significant(2), better: 'higher', group: 'formation', needs: ['temperature_K'] }),
  defineEvidence({ id: 'formationTime99_s', label: 'Time to 99 % bound', base: 't', sub: '99', unit: 's', dimension: 'time', digits: significant(2), better: 'lower', group: 'formation', needs: ['temperature_K', 'pH'] }),
  fraction('freeMetal_frac', 'Free metal in the batch', 'lower', 'batch'),
].map(quantity => [quantity.id, quantity]))

/** @throws Error for an id that is in no registry: evidence of unknown meaning is never shown or stored */
export function evidenceQuantity(id: string): EvidenceQuantity {
  const quantity = Object.hasOwn(EVIDENCE_QUANTITIES, id) ? EVIDENCE_QUANTITIES[id] : undefined
  if (quantity === undefined) throw new Error(`No evidence quantity is called ${id}.`)
  return quantity
}
