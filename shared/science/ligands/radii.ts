/**
 * Effective ionic radii by ion and coordination number, in ångström (10⁻¹⁰ m).
 * @source R. D. Shannon, Acta Cryst. A32, 751 (1976); CN 6, 8, 9 of the lanthanides and CN 6, 8 of the rest looked up in tables that quote it
 */

/** null: not tabulated at that coordination number. */
const RADII_A = {
  La3: { 6: 1.032, 8: 1.160, 9: 1.216 }, Ce3: { 6: 1.01, 8: 1.143, 9: 1.196 }, Pr3: { 6: 0.99, 8: 1.126, 9: 1.179 }, Nd3: { 6: 0.983, 8: 1.109, 9: 1.163 },
  Pm3: { 6: 0.97, 8: 1.093, 9: 1.144 }, Sm3: { 6: 0.958, 8: 1.079, 9: 1.132 }, Eu3: { 6: 0.947, 8: 1.066, 9: 1.12 }, Gd3: { 6: 0.938, 8: 1.053, 9: 1.107 },
  Tb3: { 6: 0.923, 8: 1.04, 9: 1.095 }, Dy3: { 6: 0.912, 8: 1.027, 9: 1.083 }, Ho3: { 6: 0.901, 8: 1.015, 9: 1.072 }, Er3: { 6: 0.89, 8: 1.004, 9: 1.062 },
  Tm3: { 6: 0.88, 8: 0.994, 9: 1.052 }, Yb3: { 6: 0.868, 8: 0.985, 9: 1.042 }, Lu3: { 6: 0.861, 8: 0.977, 9: 1.032 }, Y3: { 6: 0.9, 8: 1.019, 9: 1.075 },
  Sc3: { 6: 0.745, 8: 0.87 }, In3: { 6: 0.8, 8: 0.92 }, Ga3: { 6: 0.62 }, Al3: { 6: 0.535 }, Fe3: { 6: 0.645, 8: 0.78 },
  Cu2: { 6: 0.73 }, Zn2: { 6: 0.74, 8: 0.9 }, Ca2: { 6: 1.0, 8: 1.12, 9: 1.18 }, Mn2: { 6: 0.83, 8: 0.96 }, Mg2: { 6: 0.72, 8: 0.89 },
} as const satisfies Record<string, Readonly<Record<number, number>>>

export type Ion = keyof typeof RADII_A
export const IONS = Object.keys(RADII_A) as Ion[]
/** Symbol of the element, as the address and records name it. */
export const ionSymbol = (ion: Ion): string => ion.slice(0, -1)

/** The ion that a symbol stands for; null for an element without one here. */
export const ionOf = (symbol: string): Ion | null => IONS.find(ion => ionSymbol(ion) === symbol) ?? null

/** Ion as the trade writes it: Gd(III). */
export const ionName = (ion: Ion): string => `${ionSymbol(ion)}(${'I'.repeat(ionFacts(ion).charge)})`

/** Coordination numbers at which a radius is tabulated, ascending. */
export const coordinationsOf = (ion: Ion): number[] => Object.keys(RADII_A[ion]).map(Number)

export const RADII_SOURCE = 'Shannon, Acta Cryst. A32, 751 (1976)'

export interface IonFacts {
  readonly charge: number
  /** Pearson's class. */
  readonly hardness: 'hard' | 'borderline' | 'soft'
  /** Coordination numbers usual in complexes of polyamino carboxylates, the most usual first (common practice, no source). */
  readonly usual: readonly number[]
}

const LANTHANIDES: readonly Ion[] = ['La3', 'Ce3', 'Pr3', 'Nd3', 'Pm3', 'Sm3', 'Eu3', 'Gd3', 'Tb3', 'Dy3', 'Ho3', 'Er3', 'Tm3', 'Yb3', 'Lu3', 'Y3']
const OTHERS: Readonly<Partial<Record<Ion, IonFacts>>> = {
  Sc3: { charge: 3, hardness: 'hard', usual: [8, 6] }, In3: { charge: 3, hardness: 'hard', usual: [8, 6] }, Ga3: { charge: 3, hardness: 'hard', usual: [6] },
  Al3: { charge: 3, hardness: 'hard', usual: [6] }, Fe3: { charge: 3, hardness: 'hard', usual: [6] }, Cu2: { charge: 2, hardness: 'borderline', usual: [6] },
  Zn2: { charge: 2, hardness: 'borderline', usual: [6] }, Ca2: { charge: 2, hardness: 'hard', usual: [8, 6] }, Mn2: { charge: 2, hardness: 'hard', usual: [6] }, Mg2: { charge: 2, hardness: 'hard', usual: [6] },
}

/** @source hardness: R. G. Pearson, J. Am. Chem. Soc. 85, 3533 (1963) */
export function ionFacts(ion: Ion): IonFacts {
  return OTHERS[ion] ?? { charge: 3, hardness: 'hard', usual: LANTHANIDES.indexOf(ion) > LANTHANIDES.indexOf('Er3') && ion !== 'Y3' ? [8, 9] : [9, 8] }
}

/** Radius in ångström; null where none is tabulated at that coordination number. */
export function radius_A(ion: Ion, coordination: number): number | null {
  const table: Readonly<Record<number, number>> = RADII_A[ion]
  return table[coordination] ?? null
}
