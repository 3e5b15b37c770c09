/**
 * The published selectivity constant, kept apart from the plasma model on purpose: its competitor set is part of its definition.
 *
 * K_sel = K_GdL / (α_H + K_CaL [Ca] + K_CuL [Cu] + K_ZnL [Zn])
 *
 * @source W. P. Cacheris, S. C. Quay, S. M. Rocklage, Magn. Reson. Imaging 8, 467 (1990).
 */
import { log10Sum, logAlphaProton } from './protonation'

/** Free competitor concentrations of the definition, mol/L. */
export const SELECTIVITY_COMPETITORS_M = { Ca: 2.5e-3, Cu: 1e-6, Zn: 50e-6 } as const
export type SelectivityCompetitor = keyof typeof SELECTIVITY_COMPETITORS_M

export interface SelectivityInput {
  readonly logK: number
  readonly ligandProtonation: readonly number[]
  /** log K of the competitors; one left out is named in the answer and makes K_sel an upper bound. */
  readonly logKCompetitors: Readonly<Partial<Record<SelectivityCompetitor, number>>>
  readonly pcH?: number
}

export interface Selectivity {
  readonly logKSel: number
  /** '=' where every competitor is known, '<' where one is left out. */
  readonly kind: '=' | '<'
  readonly leftOut: readonly SelectivityCompetitor[]
}

/** log K_sel at pH 7.4 unless stated otherwise. */
export function selectivity(input: SelectivityInput): Selectivity {
  const names = Object.keys(SELECTIVITY_COMPETITORS_M) as SelectivityCompetitor[]
  const leftOut = names.filter(name => input.logKCompetitors[name] === undefined)
  const terms = names
    .filter(name => !leftOut.includes(name))
    .map(name => (input.logKCompetitors[name] ?? NaN) + Math.log10(SELECTIVITY_COMPETITORS_M[name]))
  const denominator = log10Sum([logAlphaProton(input.ligandProtonation, input.pcH ?? 7.4), ...terms])
  return { logKSel: input.logK - denominator, kind: leftOut.length ? '<' : '=', leftOut }
}
