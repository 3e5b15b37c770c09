import type { Donor } from '../../../shared/schemas/ligand'
import { distancesFrom, smallestRingThrough, type Graph, type GraphAtom } from './graph'

type DonorKind = Donor['kind']
export interface DonorAtom { atom: number, kind: DonorKind }

/** A chelate ring of a lanthanide has five or six members: its oxygen is three or four bonds from the nitrogen. */
const CHELATE_BONDS = 4

/**
 * Donor atoms of a ligand by the usual rules: amine and pyridine nitrogen; one oxygen for each carboxylate, phosphonate or phosphinate; amide and
 * hydroxyl oxygen where it closes a five- or six-membered chelate ring with a donor nitrogen. A proposal: crowding and bridging are not looked at.
 */
export function findDonors(graph: Graph): DonorAtom[] {
  const nitrogen = graph.atoms.filter(atom => atom.symbol === 'N').flatMap(atom => nitrogenDonor(graph, atom))
  const reach = nitrogen.map(({ atom }) => distancesFrom(graph, atom).distance)
  const isNear = (atom: number): boolean => reach.some(distance => distance[atom]! <= CHELATE_BONDS)
  const oxygen = graph.atoms.flatMap(atom => acidDonor(graph, atom) ?? neutralOxygen(graph, atom, isNear))
  return [...nitrogen, ...oxygen]
}

/** Donors grouped as the registry keeps them, nitrogen first. */
export function groupDonors(donors: readonly DonorAtom[]): Donor[] {
  const counts = new Map<DonorKind, number>()
  for (const { kind } of donors) counts.set(kind, (counts.get(kind) ?? 0) + 1)
  return [...counts].map(([kind, count]) => ({ element: kind.endsWith('N') ? 'N' as const : 'O' as const, kind, count }))
}

function nitrogenDonor(graph: Graph, atom: GraphAtom): DonorAtom[] {
  if (atom.isAromatic) return atom.hydrogens === 0 && atom.charge === 0 && atom.neighbours.length === 2 ? [{ atom: atom.index, kind: 'pyridine N' }] : []
  const isPlain = atom.charge === 0 && atom.neighbours.every(({ order }) => order === 1)
  const isHeld = atom.neighbours.some(({ atom: other }) => doubleOxygen(graph, other).length > 0 || graph.atoms[other]!.isAromatic || graph.atoms[other]!.symbol !== 'C')
  return isPlain && !isHeld ? [{ atom: atom.index, kind: 'amine N' }] : []
}

const doubleOxygen = (graph: Graph, atom: number): number[] =>
  graph.atoms[atom]!.neighbours.filter(({ atom: other, order }) => order === 2 && graph.atoms[other]!.symbol === 'O').map(({ atom: other }) => other)

/** Oxygens of an acid centre that carry a proton or a charge. */
export function acidOxygens(graph: Graph, atom: GraphAtom): number[] {
  const isCentre = (atom.symbol === 'C' || atom.symbol === 'P' || atom.symbol === 'S') && doubleOxygen(graph, atom.index).length > 0
  if (!isCentre) return []
  return atom.neighbours.filter(({ atom: other, order }) => order === 1 && isHydroxide(graph.atoms[other]!)).map(({ atom: other }) => other)
}

const isHydroxide = (atom: GraphAtom): boolean => atom.symbol === 'O' && atom.neighbours.length === 1 && (atom.hydrogens === 1 || atom.charge === -1)

function acidDonor(graph: Graph, atom: GraphAtom): DonorAtom[] | null {
  const oxygens = acidOxygens(graph, atom)
  if (oxygens.length === 0 || atom.symbol === 'S') return null
  const kind: DonorKind = atom.symbol === 'C' ? 'carboxylate O' : oxygens.length > 1 ? 'phosphonate O' : 'phosphinate O'
  return [{ atom: oxygens[0]!, kind }]
}

function neutralOxygen(graph: Graph, atom: GraphAtom, isNear: (atom: number) => boolean): DonorAtom[] {
  if (atom.symbol !== 'O' || !isNear(atom.index)) return []
  const [only] = atom.neighbours
  if (!only || atom.neighbours.length !== 1) return []
  const carrier = graph.atoms[only.atom]!
  if (only.order === 2) {
    const isAmide = carrier.symbol === 'C' && carrier.neighbours.some(({ atom: other, order }) => order === 1 && graph.atoms[other]!.symbol === 'N')
    return isAmide ? [{ atom: atom.index, kind: 'amide O' }] : []
  }
  if (!isHydroxide(atom) || carrier.symbol !== 'C' || doubleOxygen(graph, carrier.index).length > 0) return []
  return [{ atom: atom.index, kind: carrier.isAromatic ? 'phenolate O' : 'hydroxyl O' }]
}

/** The smallest ring of at least nine atoms that holds three donor nitrogens or more: what makes a ligand a macrocycle here. */
export function findDonorRing(graph: Graph, donors: readonly DonorAtom[]): number[] | null {
  const nitrogen = new Set(donors.filter(({ kind }) => kind.endsWith('N')).map(({ atom }) => atom))
  let best: number[] | null = null
  for (let bond = 0; bond < graph.bonds.length; bond++) {
    const ring = smallestRingThrough(graph, bond)
    if (!ring || ring.length < 9 || ring.filter(atom => nitrogen.has(atom)).length < 3) continue
    if (!best || ring.length < best.length) best = ring
  }
  return best
}
