/** Hints beside a metal and a ligand, each with its reason in words; never a verdict, never a number to rank by. */
import { cavity_A, denticity, donorClasses, ligandCharge, type LigandFacts } from './donors'
import { ionFacts, ionName, radius_A, type Ion } from './radii'

export interface Hint {
  readonly about: 'size' | 'hardness' | 'denticity' | 'charge' | 'shape'
  readonly leaning: 'for' | 'against' | 'open'
  readonly reason: string
}

/** Coordination sites of an agent for relaxation or exchange are left to this many waters. */
export interface Need {
  readonly coordination: number
  readonly waters: number
}

/** Picometres, to the tenth that the tables give. */
const inPm = (length_A: number): string => String(Math.round(1000 * length_A) / 10)

export function hintsFor(ion: Ion, ligand: LigandFacts, need: Need): readonly Hint[] {
  return [sizeHint(ion, ligand, need), hardnessHint(ion, ligand), denticityHint(ligand, need), chargeHint(ion, ligand), shapeHint(ligand)]
}

function sizeHint(ion: Ion, ligand: LigandFacts, need: Need): Hint {
  const radius = radius_A(ion, need.coordination)
  if (radius === null) return { about: 'size', leaning: 'open', reason: `No radius of ${ionName(ion)} is tabulated at coordination number ${need.coordination}.` }
  const size = `${ionName(ion)} has a radius of ${inPm(radius)} pm at coordination number ${need.coordination} (Shannon)`
  const cavity = cavity_A(ligand.ringAtoms)
  if (ligand.ringAtoms === null) return { about: 'size', leaning: 'open', reason: `${size}; an open chain folds to any size.` }
  if (ligand.ringAtoms === 'unknown') return { about: 'size', leaning: 'open', reason: `${size}; the size of the ring is not known.` }
  if (cavity === null) return { about: 'size', leaning: 'open', reason: `${size}; no cavity is listed for a ring of ${ligand.ringAtoms}.` }
  const fits = radius >= cavity[0] && radius <= cavity[1]
  const span = `${inPm(cavity[0])} to ${inPm(cavity[1])} pm (from memory)`
  if (fits) return { about: 'size', leaning: 'for', reason: `${size}, within what a ring of ${ligand.ringAtoms} suits, ${span}.` }
  return { about: 'size', leaning: 'against', reason: `${size}, ${radius < cavity[0] ? 'smaller' : 'larger'} than what a ring of ${ligand.ringAtoms} suits, ${span}${radius < cavity[0] ? '' : '; it can still sit above the ring'}.` }
}

function hardnessHint(ion: Ion, ligand: LigandFacts): Hint {
  const { hardness } = ionFacts(ion)
  const { hard, borderline, soft } = donorClasses(ligand)
  const unlisted = denticity(ligand) - hard - borderline - soft
  const donors = `${hard} hard, ${borderline} borderline and ${soft} soft donors${unlisted > 0 ? `, ${unlisted} of a class that is not known` : ''}`
  if (hard + borderline + soft === 0) return { about: 'hardness', leaning: 'open', reason: `No donor of ${ligand.name} is listed.` }
  if (hardness === 'hard') return { about: 'hardness', leaning: soft > 0 ? 'against' : 'for', reason: `${ionName(ion)} is hard and ${ligand.name} has ${donors}.` }
  return { about: 'hardness', leaning: hardness === 'borderline' || soft > 0 ? 'for' : 'against', reason: `${ionName(ion)} is ${hardness} and ${ligand.name} has ${donors}.` }
}

function denticityHint(ligand: LigandFacts, { coordination, waters }: Need): Hint {
  const has = denticity(ligand)
  const needed = coordination - waters
  const words = `${has} donors for ${needed} sites (coordination number ${coordination}, ${waters} left to water)`
  if (has === needed) return { about: 'denticity', leaning: 'for', reason: `${words}: filled.` }
  return has > needed
    ? { about: 'denticity', leaning: 'against', reason: `${words}: a donor stays off or takes the place of the water.` }
    : { about: 'denticity', leaning: 'against', reason: `${words}: ${needed - has} more ${needed - has === 1 ? 'site is' : 'sites are'} open to water, phosphate or carbonate.` }
}

function chargeHint(ion: Ion, ligand: LigandFacts): Hint {
  const charge = ionFacts(ion).charge + ligandCharge(ligand)
  if (charge === 0) return { about: 'charge', leaning: 'for', reason: 'The complex is neutral: least osmotic load.' }
  return charge < 0
    ? { about: 'charge', leaning: 'for', reason: `The complex is an anion of charge −${-charge}: strong attraction in the complex, a counter-ion in the formulation.` }
    : { about: 'charge', leaning: 'against', reason: `The complex is a cation of charge +${charge}: weaker attraction of the ligand and more binding of anions.` }
}

function shapeHint(ligand: LigandFacts): Hint {
  return ligand.ringAtoms === null
    ? { about: 'shape', leaning: 'against', reason: 'An open chain forms its complex fast and lets go fast.' }
    : { about: 'shape', leaning: 'for', reason: `A ring${ligand.ringAtoms === 'unknown' ? '' : ` of ${ligand.ringAtoms}`} lets go slowly, and forms slowly too: warm it when labelling.` }
}
