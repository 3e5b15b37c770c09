import { Molecule } from 'openchemlib'
import type { StructureDrawing } from '../../../shared/schemas/structure'
import type { Graph } from './graph'

const MARGIN = 1.1
type Bond = StructureDrawing['bonds'][number]

/**
 * Lays a molecule out for drawing: positions in bond lengths from the toolkit's own layout, y downwards, moved so that the picture begins at 0.
 * `ring`: atoms of the donor ring, whose middle is where the metal is drawn.
 */
export function drawingOf(molecule: Molecule, graph: Graph, ring: readonly number[] | null): StructureDrawing {
  const scale = 1 / averageBondLength(molecule, graph)
  const xs = graph.atoms.map(({ index }) => molecule.getAtomX(index) * scale)
  const ys = graph.atoms.map(({ index }) => molecule.getAtomY(index) * scale)
  const left = Math.min(...xs) - MARGIN
  const top = Math.min(...ys) - MARGIN
  const place = (index: number) => ({ x: round(xs[index]! - left), y: round(ys[index]! - top) })
  const at = graph.atoms.map((_, index) => place(index))
  const mean = (values: number[]): number => round(values.reduce((sum, one) => sum + one, 0) / values.length)
  return {
    width: round(Math.max(...xs) - left + MARGIN), height: round(Math.max(...ys) - top + MARGIN),
    atoms: graph.atoms.map((atom, index) => ({
      ...at[index]!, symbol: atom.symbol, charge: atom.charge, hydrogens: atom.symbol === 'C' ? 0 : atom.hydrogens,
      isShown: atom.symbol !== 'C' || atom.neighbours.length === 0 || atom.charge !== 0,
      hydrogensLeft: atom.neighbours.length > 0 && mean(atom.neighbours.map(one => at[one.atom]!.x)) > at[index]!.x + 0.1,
    })),
    bonds: graph.bonds.map((bond, index) => ({ from: bond.from, to: bond.to, order: bond.order, wedge: wedgeOf(molecule, index), inner: innerSide(graph, index, at) })),
    metalAt: ring ? { x: mean(ring.map(index => at[index]!.x)), y: mean(ring.map(index => at[index]!.y)) } : null,
  }
}

/**
 * Sets the donor ring as a regular polygon with its first nitrogen at the upper right and lets the toolkit lay out the rest around it: its own layout
 * folds rings of twelve atoms into their own middle, where the metal belongs.
 */
export function layOutRing(molecule: Molecule, graph: Graph, ring: readonly number[]): void {
  const start = Math.max(ring.findIndex(atom => graph.atoms[atom]!.symbol === 'N'), 0)
  const radius = 1 / (2 * Math.sin(Math.PI / ring.length))
  for (let k = 0; k < ring.length; k++) {
    const atom = ring[(start + k) % ring.length]!
    const angle = Math.PI / 4 + (2 * Math.PI * k) / ring.length
    molecule.setAtomX(atom, radius * Math.cos(angle))
    molecule.setAtomY(atom, -radius * Math.sin(angle))
    molecule.setAtomMarker(atom, true)
  }
  molecule.inventCoordinates({ keepMarkedAtomCoordinates: true })
}

const round = (value: number): number => Math.round(value * 1000) / 1000

function averageBondLength(molecule: Molecule, graph: Graph): number {
  if (graph.bonds.length === 0) return 1
  const total = graph.bonds.reduce((sum, { from, to }) => sum + Math.hypot(molecule.getAtomX(from) - molecule.getAtomX(to), molecule.getAtomY(from) - molecule.getAtomY(to)), 0)
  return total / graph.bonds.length || 1
}

function wedgeOf(molecule: Molecule, bond: number): Bond['wedge'] {
  const type = molecule.getBondType(bond)
  return type === Molecule.cBondTypeUp ? 'up' : type === Molecule.cBondTypeDown ? 'down' : 'none'
}

/** On which side of a double bond its second line goes: the side where more neighbours are, in the middle when they balance or an end is bare. */
function innerSide(graph: Graph, bond: number, at: readonly { x: number, y: number }[]): Bond['inner'] {
  const { from, to, order } = graph.bonds[bond]!
  if (order !== 2) return 'middle'
  const [a, b] = [at[from]!, at[to]!]
  const side = (index: number): number => Math.sign((b.x - a.x) * (at[index]!.y - a.y) - (b.y - a.y) * (at[index]!.x - a.x))
  const others = [from, to].map(end => graph.atoms[end]!.neighbours.map(one => one.atom).filter(one => one !== from && one !== to))
  if (others.some(list => list.length === 0)) return 'middle'
  const balance = others.flat().reduce((sum, index) => sum + side(index), 0)
  return balance > 0 ? 'right' : balance < 0 ? 'left' : 'middle'
}
