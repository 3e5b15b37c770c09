/**
 * Donor groups and their class. Hard metal ions hold hard donors (oxygen before nitrogen), soft ones soft donors.
 * @source R. G. Pearson, J. Am. Chem. Soc. 85, 3533 (1963); the classes of the groups from memory
 */

export const DONORS = {
  carboxylate: { hardness: 'hard', atom: 'O', charge: -1, words: 'carboxylate oxygen' },
  phosphonate: { hardness: 'hard', atom: 'O', charge: -2, words: 'phosphonate oxygen' },
  phosphinate: { hardness: 'hard', atom: 'O', charge: -1, words: 'phosphinate oxygen' },
  phenolate: { hardness: 'hard', atom: 'O', charge: -1, words: 'phenolate oxygen' },
  hydroxamate: { hardness: 'hard', atom: 'O', charge: -1, words: 'hydroxamate oxygen' },
  alcohol: { hardness: 'hard', atom: 'O', charge: 0, words: 'hydroxyl oxygen' },
  amide: { hardness: 'hard', atom: 'O', charge: 0, words: 'amide oxygen' },
  ether: { hardness: 'hard', atom: 'O', charge: 0, words: 'ether oxygen' },
  amine: { hardness: 'hard', atom: 'N', charge: 0, words: 'amine nitrogen' },
  pyridine: { hardness: 'borderline', atom: 'N', charge: 0, words: 'pyridine nitrogen' },
  thioether: { hardness: 'soft', atom: 'S', charge: 0, words: 'thioether sulfur' },
  thiolate: { hardness: 'soft', atom: 'S', charge: -1, words: 'thiolate sulfur' },
} as const satisfies Record<string, { hardness: 'hard' | 'borderline' | 'soft', atom: string, charge: number, words: string }>

export type Donor = keyof typeof DONORS

export interface LigandFacts {
  readonly name: string
  /** Number of each donor that can bind one metal. */
  readonly donors: Readonly<Partial<Record<Donor, number>>>
  /** Atoms in the ring that holds the metal; null for an open chain. */
  readonly ringAtoms: number | 'unknown' | null
  /** Charge of the fully deprotonated ligand where groups beside the donors carry some of it; left out: that of the donors. */
  readonly charge?: number
  /** Donor atoms that reach the metal at once where that is not what the groups add up to. */
  readonly denticity?: number
}

const counted = (ligand: LigandFacts): (readonly [Donor, number])[] => (Object.keys(DONORS) as Donor[]).flatMap((donor) => {
  const count = ligand.donors[donor] ?? 0
  return count > 0 ? [[donor, count] as const] : []
})

/** Donor atoms that can reach the metal at once. */
export function denticity(ligand: LigandFacts): number {
  return ligand.denticity ?? counted(ligand).reduce((sum, [, count]) => sum + count, 0)
}

/** Charge of the fully deprotonated ligand. */
export function ligandCharge(ligand: LigandFacts): number {
  return ligand.charge ?? counted(ligand).reduce((sum, [donor, count]) => sum + count * DONORS[donor].charge, 0)
}

/** How many donors are of each class. */
export function donorClasses(ligand: LigandFacts): Readonly<Record<'hard' | 'borderline' | 'soft', number>> {
  const classes = { hard: 0, borderline: 0, soft: 0 }
  for (const [donor, count] of counted(ligand)) classes[DONORS[donor].hardness] += count
  return classes
}

/** Mean ion radius, in ångström, that fits the cavity of a ring of nitrogen atoms: from memory, ±0.15, a hint at most. */
const CAVITY_A: Readonly<Record<number, readonly [number, number]>> = { 9: [0.6, 0.8], 12: [0.9, 1.15], 14: [0.6, 0.75], 15: [0.9, 1.1], 18: [1.1, 1.4] }

/** Smallest and largest radius that a ring is taken to suit; null for an open chain, and for a ring that is not listed or not known. */
export function cavity_A(ringAtoms: LigandFacts['ringAtoms']): readonly [number, number] | null {
  return typeof ringAtoms === 'number' ? CAVITY_A[ringAtoms] ?? null : null
}
