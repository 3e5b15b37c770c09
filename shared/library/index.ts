import { COMPETITORS } from './competitors'
import type { LibraryLigand } from './define'
import { OPEN_CHAINS } from './openChains'
import { RINGS } from './rings'

/** Ligands of the starter library, in the order they are offered. */
export const LIBRARY: readonly LibraryLigand[] = [...OPEN_CHAINS, ...RINGS, ...COMPETITORS]

export const libraryLigand = (key: string): LibraryLigand | null => LIBRARY.find(one => one.key === key) ?? null
