import type { Molecule } from 'openchemlib'

export interface GraphAtom { index: number, symbol: string, atomicNo: number, charge: number, hydrogens: number, isAromatic: boolean, neighbours: readonly Neighbour[] }
export interface Neighbour { atom: number, bond: number, order: number }

/** A molecule as a plain graph, so that what counts as a donor or a ring can be read without knowing the toolkit. */
export interface Graph { atoms: readonly GraphAtom[], bonds: readonly { from: number, to: number, order: number }[] }

export function graphOf(molecule: Molecule): Graph {
  const atoms: GraphAtom[] = []
  for (let index = 0; index < molecule.getAllAtoms(); index++) {
    const neighbours: Neighbour[] = []
    for (let k = 0; k < molecule.getConnAtoms(index); k++) {
      const bond = molecule.getConnBond(index, k)
      neighbours.push({ atom: molecule.getConnAtom(index, k), bond, order: molecule.getBondOrder(bond) })
    }
    atoms.push({
      index, symbol: molecule.getAtomLabel(index), atomicNo: molecule.getAtomicNo(index), charge: molecule.getAtomCharge(index),
      hydrogens: molecule.getAllHydrogens(index), isAromatic: molecule.isAromaticAtom(index), neighbours,
    })
  }
  const bonds = Array.from({ length: molecule.getAllBonds() }, (_, bond) => ({ from: molecule.getBondAtom(0, bond), to: molecule.getBondAtom(1, bond), order: molecule.getBondOrder(bond) }))
  return { atoms, bonds }
}

/** Number of bonds from one atom to every other; Infinity where there is no way. */
export function distancesFrom(graph: Graph, start: number, withoutBond = -1): { distance: number[], before: number[] } {
  const distance = graph.atoms.map(() => Infinity)
  const before = graph.atoms.map(() => -1)
  distance[start] = 0
  const queue = [start]
  for (let head = 0; head < queue.length; head++) {
    const at = queue[head]!
    for (const { atom, bond } of graph.atoms[at]!.neighbours) {
      if (bond === withoutBond || distance[atom] !== Infinity) continue
      distance[atom] = distance[at]! + 1
      before[atom] = at
      queue.push(atom)
    }
  }
  return { distance, before }
}

/** The smallest ring through a bond, as atoms in order; null when the bond is in no ring. */
export function smallestRingThrough(graph: Graph, bond: number): number[] | null {
  const { from, to } = graph.bonds[bond]!
  const { distance, before } = distancesFrom(graph, from, bond)
  if (distance[to] === Infinity) return null
  const ring = [to]
  for (let at = before[to]!; at !== -1; at = before[at]!) ring.push(at)
  return ring
}
