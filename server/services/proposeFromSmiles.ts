import { Molecule } from 'openchemlib'
import { AppError } from '../../shared/errors'
import type { StructureDto } from '../../shared/schemas/structure'
import { acidOxygens, findDonorRing, findDonors, groupDonors } from './structure/donors'
import { drawingOf, layOutRing } from './structure/draw'
import { graphOf, type Graph } from './structure/graph'

const HYDROGEN_g_per_mol = 1.008
/** Layout time grows with the square of the size; ligands of MR agents stay far below this. */
const MOST_ATOMS = 200

/**
 * Reads a ligand from its SMILES: mass, charge, donors, ring or open chain, and a drawing. Everything but the drawing is a proposal for the form.
 * @throws AppError('invalidInput') when the text is no SMILES, names no atom, holds a metal or is too large
 */
export function proposeFromSmiles(smiles: string): StructureDto {
  const molecule = readSmiles(smiles)
  const graph = graphOf(molecule)
  checkAtoms(graph)
  const donors = findDonors(graph)
  const ring = findDonorRing(graph, donors)
  if (ring) layOutRing(molecule, graph, ring)
  const formula = molecule.getMolecularFormula()
  const acidProtons = countAcidProtons(graph)
  const chargeAsDrawn = graph.atoms.reduce((sum, atom) => sum + atom.charge, 0)
  return {
    formula: formula.formula, molarMass_g_per_mol: formula.relativeWeight, chargeAsDrawn,
    deprotonatedCharge: chargeAsDrawn - acidProtons, deprotonatedMass_g_per_mol: formula.relativeWeight - acidProtons * HYDROGEN_g_per_mol,
    donors: groupDonors(donors), denticity: donors.length, topology: ring ? 'ring' : 'openChain', ringSize: ring?.length ?? null,
    topologyReason: ring
      ? `A ring of ${ring.length} atoms holds ${ring.filter(atom => donors.some(one => one.atom === atom && one.kind.endsWith('N'))).length} donor nitrogens.`
      : 'No ring of nine atoms or more holds three donor nitrogens.',
    drawing: drawingOf(molecule, graph, ring),
  }
}

/**
 * Atoms in the ring that holds the donors of a ligand; null where its structure has no such ring.
 * @throws AppError('invalidInput') as above
 */
export function ringAtomsOf(smiles: string): number | null {
  const graph = graphOf(readSmiles(smiles))
  return findDonorRing(graph, findDonors(graph))?.length ?? null
}

function readSmiles(smiles: string): Molecule {
  const text = smiles.trim()
  const molecule = parse(text)
  if (molecule.getAllAtoms() === 0) throw new AppError('invalidInput', 'The structure holds no atom.', { field: 'smiles', accepted: 'a SMILES text such as OC(=O)CN(CC(O)=O)CC(O)=O' })
  molecule.removeExplicitHydrogens()
  molecule.ensureHelperArrays(Molecule.cHelperCIP)
  return molecule
}

function parse(text: string): Molecule {
  try {
    return Molecule.fromSmiles(text)
  }
  catch (error) {
    const reason = error instanceof Error ? error.message.replace(/^.*?:\s*/, '') : String(error)
    throw new AppError('invalidInput', `The structure cannot be read: ${reason}.`, { field: 'smiles', accepted: 'a SMILES text such as OC(=O)CN(CC(O)=O)CC(O)=O' })
  }
}

function checkAtoms(graph: Graph): void {
  if (graph.atoms.length > MOST_ATOMS) throw new AppError('invalidInput', `The structure has ${graph.atoms.length} atoms.`, { field: 'smiles', accepted: `at most ${MOST_ATOMS} atoms without hydrogen` })
  const odd = graph.atoms.find(atom => !ORGANIC.has(atom.symbol))
  if (odd) throw new AppError('invalidInput', `The structure holds ${odd.symbol}.`, { field: 'smiles', accepted: 'the ligand alone, without its metal: H, B, C, N, O, F, Si, P, S, Cl, Br, Se and I' })
}

const ORGANIC = new Set(['H', 'D', 'T', 'B', 'C', 'N', 'O', 'F', 'Si', 'P', 'S', 'Cl', 'Br', 'Se', 'I'])

/** Protons of carboxylic, phosphonic, phosphinic and sulfonic acids. Alcohols, phenols and ammonium groups keep theirs. */
function countAcidProtons(graph: Graph): number {
  return graph.atoms.flatMap(atom => acidOxygens(graph, atom)).filter(oxygen => graph.atoms[oxygen]!.hydrogens === 1).length
}
