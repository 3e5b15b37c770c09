import { z } from 'zod'

/**
 * Lanthanides an agent can hold, with standard atomic masses (IUPAC 2021, rounded). Promethium has no stable isotope and is left out.
 */
export const LANTHANIDES = {
  La: { name: 'lanthanum', molarMass_g_per_mol: 138.905 }, Ce: { name: 'cerium', molarMass_g_per_mol: 140.116 },
  Pr: { name: 'praseodymium', molarMass_g_per_mol: 140.908 }, Nd: { name: 'neodymium', molarMass_g_per_mol: 144.242 },
  Sm: { name: 'samarium', molarMass_g_per_mol: 150.36 }, Eu: { name: 'europium', molarMass_g_per_mol: 151.964 },
  Gd: { name: 'gadolinium', molarMass_g_per_mol: 157.25 }, Tb: { name: 'terbium', molarMass_g_per_mol: 158.925 },
  Dy: { name: 'dysprosium', molarMass_g_per_mol: 162.5 }, Ho: { name: 'holmium', molarMass_g_per_mol: 164.93 },
  Er: { name: 'erbium', molarMass_g_per_mol: 167.259 }, Tm: { name: 'thulium', molarMass_g_per_mol: 168.934 },
  Yb: { name: 'ytterbium', molarMass_g_per_mol: 173.045 }, Lu: { name: 'lutetium', molarMass_g_per_mol: 174.967 },
} as const

/**
 * Effective magnetic moments of the aqua ions at room temperature, Bohr magnetons: calculated g_J√(J(J + 1)), except Sm and Eu, whose excited states count (measured).
 * @source Van Vleck, The Theory of Electric and Magnetic Susceptibilities (1932); values from memory
 */
export const MOMENTS_muB: Readonly<Partial<Record<keyof typeof LANTHANIDES, number>>> = {
  Ce: 2.54, Pr: 3.58, Nd: 3.62, Sm: 1.6, Eu: 3.4, Gd: 7.94, Tb: 9.72, Dy: 10.65, Ho: 10.61, Er: 9.58, Tm: 7.56, Yb: 4.54,
}

export type Metal = keyof typeof LANTHANIDES
export const METALS = Object.keys(LANTHANIDES) as [Metal, ...Metal[]]
export const MetalSymbol = z.enum(METALS, { error: `The metal must be one of the lanthanides. Accepted: ${METALS.join(', ')}.` })

/** Charge of the aqua ions that the product deals with. */
export const METAL_CHARGE = 3
