/**
 * What the placement reads (evidence) and what it returns (placements).
 * Evidence is passed in as plain values: nothing here knows of fits, tables or people.
 */

/** How the agent gives contrast. Front, ranks and probabilities are kept apart by mechanism. */
export type Mechanism = 'T1' | 'T2' | 'CEST'

/** Ring ligands hold the metal inside a macrocycle; open-chain ones do not. */
export type Topology = 'ring' | 'openChain'

/** An exact value, or one known only to lie below ('<') or above ('>') the number given. */
export type ValueKind = '=' | '<' | '>'

/** Lower and upper end of a 95 % interval. */
export type Interval = readonly [number, number]

/** One value of one batch or complex, with what stands behind it. `null` means not known, never zero. */
export interface EvidenceItem {
  readonly id: string
  /** What is measured: one of the names in `PLACEMENT_QUANTITIES`, or another, which is left alone. */
  readonly quantity: string
  readonly value: number
  readonly kind: ValueKind
  /** Standard error, the shared scale error included. */
  readonly se: number | null
  readonly interval: Interval | null
  readonly unit: string
  /** Conditions by name with the unit as suffix: temperature_K, pH, b0_T, medium, ionicStrength_M, metal ... */
  readonly conditions: Readonly<Record<string, number | string | null>>
  readonly signed: boolean
  readonly batchId: string | null
  /** Values that share one scale error (a stock assay) or come from one fit name the same group. */
  readonly covarianceGroup: CovarianceGroup | null
  /**
   * What belongs to the value itself. Read here: `metal` (of a constant), `protonation` (stepwise log K of the ligand, most basic first, with a
   * log K), `pHMin` and `pHMax` (measured range), `enthalpy_kJ_per_mol` and `enthalpy_se_kJ_per_mol` (of a rate constant).
   */
  readonly parameters?: Readonly<Record<string, ParameterValue>>
}

export type ParameterValue = number | string | boolean | null | readonly number[]

/**
 * A shared source of error. `scaleFraction` is the relative standard error of a factor common to all members
 * (0 where there is none); it is a part of each member's `se`, not an addition to it. `correlation` gives this value's correlation with other members of one fit, by evidence id.
 */
export interface CovarianceGroup {
  readonly id: string
  readonly scaleFraction: number
  readonly correlation?: Readonly<Record<string, number>>
}

/** Everything known of one complex that the placement may use. */
export interface AgentEvidence {
  readonly complexId: string
  readonly code: string
  readonly mechanism: Mechanism
  readonly topology: Topology
  readonly evidence: readonly EvidenceItem[]
}

/** Names of the evidence quantities that the placement reads; the unit is the suffix. */
export const PLACEMENT_QUANTITIES = [
  'r1_per_mM_s', 'r2_per_mM_s', 'workingConcentration_mM',
  'k0_per_s', 'k1_per_M_s', 'k2_per_M2_s', 'kZn_per_M_s', 'kCu_per_M_s', 'kCa_per_M_s',
  'kZnH_per_M2_s', 'kCuH_per_M2_s', 'k1_per_s', 'k3_per_s', 'kProton_per_M', 'kMetal_per_M',
  'halfLifeAcid_s', 'zincPhosphateRatio',
  'logK', 'logKConditional', 'pM', 'freeMetal_frac', 'boundAtEquilibrium_frac',
] as const
export type PlacementQuantity = (typeof PLACEMENT_QUANTITIES)[number]

/** Where the mark stands: in the plane, or in the lane that names what is missing. */
export type Lane = 'plane' | 'lossMissing' | 'concentrationMissing' | 'neither'

/** Something the agent lacks, in words, and the role that could measure it. */
export interface MissingItem {
  /** 'concentration' and 'loss' put the agent into a lane; the others leave a limit or a verdict open. */
  readonly key: 'concentration' | 'loss' | 'freeMetal' | 'equilibrium'
  readonly what: string
  readonly whoCanMeasure: string
}

/** A derived number with the evidence it rests on. `interval` is 95 %; `se` is on the linear scale. */
export interface PlacedQuantity {
  readonly value: number
  readonly kind: ValueKind
  readonly se: number | null
  readonly interval: Interval | null
  readonly unit: string
  readonly evidenceIds: readonly string[]
  readonly label: string
  /** True where the value was carried over (temperature, field, pH) from where it was measured. */
  readonly carried: boolean
}

export type LimitOutcome = 'within' | 'over' | 'not known'

export interface JudgedLimit {
  readonly key: string
  readonly label: string
  readonly unit: string
  readonly bound: 'atMost' | 'atLeast'
  readonly limit: number
  /** The number that was judged; null where there is none. */
  readonly value: number | null
  readonly outcome: LimitOutcome
  /** 'limit' bars the agent from the front when over; 'warning' only says so. */
  readonly weight: 'limit' | 'warning'
  readonly evidenceIds: readonly string[]
}

/** Where a bound points: the true value lies that way from the mark. */
export interface BoundArrow {
  readonly axis: 'loss' | 'concentration'
  readonly towards: 'lower' | 'higher'
}

/** A probability ellipse in log10–log10: half axes in decades, angle of the long axis from the loss axis. */
export interface EllipseParams {
  readonly centreLogLoss: number
  readonly centreLogConc: number
  readonly semiMajor_decades: number
  readonly semiMinor_decades: number
  readonly angle_rad: number
  readonly level: 0.68 | 0.95
}

export type PlacementFlagId =
  | 'extrapolatedPh' | 'temperatureNotCarried' | 'temperatureCarried' | 'seriesDisagree' | 'onePreparation'
  | 'missingRateTerm' | 'boundOnly' | 'mediumAssumed' | 'unsignedUsed' | 'noConditions' | 'competitorsLeftOut' | 'outsideMeasured'

export interface PlacementFlag {
  readonly id: PlacementFlagId
  readonly sentence: string
}

/** One of several series that disagree, drawn as a mark of its own. */
export interface SplitMark {
  readonly workingConc_mM: number
  readonly evidenceIds: readonly string[]
}

/** The two verdicts in words, and whether they point different ways. */
export interface Verdict {
  readonly equilibrium: 'holds' | 'condemns' | 'not known'
  readonly kinetics: 'holds' | 'letsGo' | 'not known'
  readonly equilibriumSentence: string
  readonly kineticsSentence: string
  readonly disagree: boolean
  readonly summary: string
  /** Both in one line: "Holds weakly at equilibrium, lets go very slowly." */
  readonly inWords: string
  readonly mapUses: 'kinetics' | 'neither'
  /** Which of the two the map uses, and why. */
  readonly why: string
}

/** Where one agent stands under one profile. */
export interface Placement {
  readonly complexId: string
  readonly code: string
  readonly mechanism: Mechanism
  readonly topology: Topology
  readonly lane: Lane
  readonly missing: readonly MissingItem[]
  /** Same mechanism as the profile; others are faint context. */
  readonly eligibleMechanism: boolean
  readonly workingConc_mM: PlacedQuantity | null
  readonly split: readonly SplitMark[]
  readonly kd_per_s: PlacedQuantity | null
  readonly halfLife_s: PlacedQuantity | null
  readonly loss_frac: PlacedQuantity | null
  readonly freeMetal_frac: PlacedQuantity | null
  /** f_free + (1 − f_free)·loss: the right end of the stem. */
  readonly unboundTotal_frac: PlacedQuantity | null
  readonly unbound_uM: PlacedQuantity | null
  readonly unbound_umol_per_kg: PlacedQuantity | null
  readonly ratioR2R1: PlacedQuantity | null
  readonly pM: PlacedQuantity | null
  readonly zincPhosphateRatio: PlacedQuantity | null
  readonly acidHalfLife_s: PlacedQuantity | null
  readonly boundAtEquilibrium_frac: PlacedQuantity | null
  readonly arrows: readonly BoundArrow[]
  readonly ellipse68: EllipseParams | null
  readonly ellipse95: EllipseParams | null
  /** Right end of the stem on the loss axis, and whether that end is itself only a bound. */
  readonly stem: { readonly fromLoss_frac: number, readonly toUnbound_frac: number, readonly toIsBound: boolean } | null
  /** The small tick above the mark: the fraction still bound at equilibrium. */
  readonly tick: { readonly bound_frac: number, readonly kind: ValueKind } | null
  readonly limits: readonly JudgedLimit[]
  /** All limits that are judged are within; 'not known' ones do not bar. */
  readonly withinLimits: boolean
  readonly onFront: boolean
  /** On the front even when every bound of a competitor is taken at its favourable end. */
  readonly frontSolid: boolean
  /** Complex ids that cannot be told apart from this one at 95 % on either axis. */
  readonly notDistinguishable: readonly string[]
  /** Place by metal released at the working concentration (the diagonal through the mark) among the profile's mechanism; null outside the plane. */
  readonly rank: number | null
  readonly decadesExtrapolated: number | null
  readonly preparations: number
  readonly flags: readonly PlacementFlag[]
  /** Every value that was used is signed. */
  readonly signed: boolean
  readonly verdict: Verdict
  readonly evidenceIds: readonly string[]
}
