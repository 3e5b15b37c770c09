/** Readiness of an agent for use: what is asked of it, each item declared once, and what follows from the answers. */

export type ReadinessKind = '=' | '<' | '>'
/** One answer. `se`: standard error, null where none is known. `conditions`: temperature, medium, method, as the chemist wrote it. */
export interface ReadinessValue { readonly kind: ReadinessKind, readonly value: number, readonly se: number | null, readonly conditions: string | null }

export interface ReadinessItem {
  readonly key: string
  readonly label: string
  readonly unit: string
  readonly low: number
  readonly high: number
  /** What its conditions should say. */
  readonly ask: string
}

/** Ends of the ranges are common practice, no source: they catch a wrong unit, not a bad agent. */
export const READINESS_ITEMS = [
  { key: 'solubility_mM', label: 'Solubility', unit: 'mM', low: 1e-6, high: 5000, ask: 'medium, temperature, pH' },
  { key: 'stock_mM', label: 'Stock concentration', unit: 'mM', low: 1e-6, high: 5000, ask: 'lot, medium' },
  { key: 'injectionVolume_mL', label: 'Injection volume', unit: 'mL', low: 1e-4, high: 500, ask: 'for which body mass and amount per mass' },
  { key: 'osmolality_mOsm_per_kg', label: 'Osmolality of the stock', unit: 'mOsm/kg', low: 1, high: 10000, ask: 'at which concentration, method' },
  { key: 'viscosity_mPa_s', label: 'Viscosity of the stock', unit: 'mPa·s', low: 0.1, high: 1000, ask: 'temperature, concentration' },
  { key: 'onHand_mg', label: 'Amount on hand', unit: 'mg', low: 0, high: 1e7, ask: 'lots, day weighed' },
  { key: 'needed_mg', label: 'Amount needed', unit: 'mg', low: 1e-3, high: 1e7, ask: 'for what' },
] as const satisfies readonly ReadinessItem[]
export type ReadinessKey = (typeof READINESS_ITEMS)[number]['key']
/** null = not measured, which is not zero. */
export type ReadinessValues = Readonly<Record<ReadinessKey, ReadinessValue | null>>

export interface ReadinessFinding { readonly isFlag: boolean, readonly sentence: string }

/** Labels of the items nobody has answered; all of them where no list was entered. Batches count as an item. */
export function readinessGaps(values: ReadinessValues | null, batches: number): string[] {
  return [...READINESS_ITEMS.filter(item => !values?.[item.key]).map(item => item.label), ...(batches === 0 ? ['Batches made'] : [])]
}

/** What the answers say together: whether the amount suffices, and whether the stock could be dissolved at all. A bound decides only where it lies on the right side. */
export function readinessFindings(values: ReadinessValues): ReadinessFinding[] {
  const findings: ReadinessFinding[] = []
  const { onHand_mg: onHand, needed_mg: needed, stock_mM: stock, solubility_mM: solubility } = values
  if (onHand && needed) {
    if (isLess(onHand, needed)) findings.push({ isFlag: true, sentence: `The amount on hand does not suffice${onHand.kind === '=' && needed.kind === '=' ? `: ${rounded(needed.value - onHand.value)} mg short` : ''}.` })
    else if (isAtLeast(onHand, needed)) findings.push({ isFlag: false, sentence: 'The amount on hand suffices.' })
    else findings.push({ isFlag: true, sentence: 'Whether the amount on hand suffices is not known: one of the two is only a bound.' })
  }
  if (stock && solubility && isLess(solubility, stock)) findings.push({ isFlag: true, sentence: 'The stock is said to be more concentrated than the solubility allows: one of the two needs another look.' })
  return findings
}

const isLess = (one: ReadinessValue, other: ReadinessValue): boolean => one.kind !== '>' && other.kind !== '<' && (one.value < other.value || (one.value === other.value && (one.kind === '<' || other.kind === '>')))
const isAtLeast = (one: ReadinessValue, other: ReadinessValue): boolean => one.kind !== '<' && other.kind !== '>' && one.value >= other.value
const rounded = (value: number): number => Number(value.toPrecision(4))
