import type { BoundKind } from '../evidence/records/define'
import type { RecordEntry } from '../evidence/records/entry'
import type { Donor, LigandPayload } from '../schemas/ligand'
import type { Metal } from '../schemas/metal'
import type { SourceInput } from '../schemas/source'
import type { Ion } from '../science/ligands/radii'

/**
 * The starter library: published constants of common ligands that a chemist may copy into a programme. Each value says whether it was looked up in a
 * public source, comes from memory, or is common practice without a source; none was measured by anybody here.
 */

/** One record that can be copied onto an agent of its metal. */
export interface LibraryRecord { readonly key: string, readonly kind: 'thermo' | 'rateLaw' | 'acidHalfLife' | 'zincPhosphateRatio', readonly metal: Metal, readonly entry: RecordEntry, readonly source: SourceInput }

/** log K with an ion that no agent of a programme holds, for laying ligands side by side. */
export interface LibraryConstant { readonly ion: Ion, readonly logK: number, readonly temperature_K: number, readonly ionicStrength_M: number, readonly medium: string, readonly source: SourceInput }

export interface LibraryLigand {
  readonly key: string
  /** Codes proposed when it is copied. */
  readonly code: string
  readonly payload: LigandPayload
  readonly records: readonly LibraryRecord[]
  readonly constants: readonly LibraryConstant[]
}

type Standing = 'lookedUp' | 'memory' | 'practice'
const STANDING_WORDS: Readonly<Record<Standing, string>> = { lookedUp: 'looked up', memory: 'from memory, not looked up', practice: 'common practice, no source' }

function sourceOf(standing: Standing, citation: string, { note = null, doi = null }: { note?: string | null, doi?: string | null } = {}): SourceInput {
  return { citation, doi, origin: standing === 'lookedUp' ? 'paper' : 'memory', note: `Literature, from the starter library; ${STANDING_WORDS[standing]}.${note ? ` ${note}` : ''}` }
}
export const lookedUp = (citation: string, more: { note?: string, doi?: string } = {}): SourceInput => sourceOf('lookedUp', citation, more)
export const fromMemory = (citation: string, more: { note?: string, doi?: string } = {}): SourceInput => sourceOf('memory', citation, more)
export const practice = (note: string): SourceInput => sourceOf('practice', 'Common practice, no source', { note })

/** Value as it is typed. */
export const exact = (value: number, unit = ''): RecordEntry[string] => quantity('=', value, unit)
export const quantity = (kind: BoundKind, value: number, unit: string): RecordEntry[string] => ({ type: 'quantity', kind, value, se: null, unit })
export const plain = (value: number, unit: string): RecordEntry[string] => ({ type: 'number', value, unit })
export const choice = (word: string): RecordEntry[string] => ({ type: 'choice', choice: word })
export const text = (words: string): RecordEntry[string] => ({ type: 'text', text: words })

export const donors = (groups: Partial<Record<Donor['kind'], number>>): Donor[] =>
  (Object.entries(groups) as [Donor['kind'], number][]).map(([kind, count]) => ({ kind, count, element: kind.endsWith('N') ? 'N' as const : 'O' as const }))

export interface ThermoParts {
  logK: number, protonation: readonly number[], competitors?: Readonly<Partial<Record<'Ca' | 'Mg' | 'Zn' | 'Cu' | 'Fe' | 'Mn', number>>>
  medium: string, method?: string, pHScale?: string, note?: string, source: SourceInput
}

/** Stability constants at 25 °C and I = 0.1 M, stepwise protonation constants, most basic first. */
export function thermoAt25(metal: Metal, parts: ThermoParts, key = `thermo-${metal}`): LibraryRecord {
  return {
    key, kind: 'thermo', metal, source: parts.source,
    entry: {
      logK: exact(parts.logK), protonation: { type: 'steps', steps: parts.protonation.map(value => ({ value, se: null })) }, protonationForm: choice('stepwise'),
      ...Object.fromEntries(Object.entries(parts.competitors ?? {}).map(([one, value]) => [`logK${one}`, exact(value)])),
      method: choice(parts.method ?? 'compiled'), temperature_K: plain(25, '°C'), ionicStrength_M: plain(0.1, 'M'), medium: choice(parts.medium), pHScale: choice(parts.pHScale ?? 'notStated'),
      ...(parts.note ? { note: text(parts.note) } : {}),
    },
  }
}

/** A figure of common practice, without conditions because none go with it. */
export const practiceLogK = (logK: number, note: string): LibraryRecord =>
  ({ key: 'practice-logK', kind: 'thermo', metal: 'Gd', entry: { logK: exact(logK), method: choice('practice') }, source: practice(note) })
export const practiceHalfLife = (hours: number, note: string): LibraryRecord => ({
  key: 'practice-acid', kind: 'acidHalfLife', metal: 'Gd', source: practice(note),
  entry: { halfLife: exact(hours, 'h'), acid: choice('notStated'), method: text('as the trade puts it: tetraamide against parent, strong acid') },
})

export interface RateParts { constants: Readonly<Partial<Record<'k1_per_M_s' | 'kZn_per_M_s' | 'kCu_per_M_s', number>>>, pH: readonly [number, number], ionicStrength_M?: number, medium: string, note?: string, source: SourceInput }

/** Rate law of dissociation at 25 °C. */
export const rateLawAt25 = ({ constants, pH, ionicStrength_M, medium, note, source }: RateParts): LibraryRecord => ({
  key: 'rates-Gd', kind: 'rateLaw', metal: 'Gd', source,
  entry: {
    form: choice('sum'), ...Object.fromEntries(Object.entries(constants).map(([name, value]) => [name, exact(value, 'M^-1 s^-1')])), temperature_K: plain(25, '°C'), pHMin: plain(pH[0], ''), pHMax: plain(pH[1], ''),
    ...(ionicStrength_M === undefined ? {} : { ionicStrength_M: plain(ionicStrength_M, 'M') }), medium: choice(medium), ...(note ? { note: text(note) } : {}),
  },
})

const HALF_LIVES = fromMemory('Port, Idée, Medina, Robic, Sabatou, Corot, BioMetals 21, 469 (2008), table')
/** Half-life of the gadolinium complex in 0.1 M hydrochloric acid at 25 °C. */
export const acidAt25 = (kind: BoundKind, value: number, unit: 'h' | 's'): LibraryRecord =>
  ({ key: 'acid-Gd', kind: 'acidHalfLife', metal: 'Gd', source: HALF_LIVES, entry: { halfLife: quantity(kind, value, unit), acid: choice('HCl'), acid_M: plain(0.1, 'M'), temperature_K: plain(25, '°C') } })

const ZINC = fromMemory('Laurent, Vander Elst, Muller, Contrast Media Mol. Imaging 1, 128 (2006); Port et al., BioMetals 21, 469 (2008)', { note: 'R1 without the complex is not printed with it.' })
/** Zinc and phosphate by the published protocol: 2.5 mM of each, 67 mM phosphate, pH 7, 37 °C, 20 MHz. `minutes` null: 0.80 not reached. */
export const zincAt37 = (ratio: number, minutes: number | null): LibraryRecord => ({
  key: 'zinc-Gd', kind: 'zincPhosphateRatio', metal: 'Gd', source: ZINC,
  entry: {
    ratioAt72h: exact(ratio), timeTo080: minutes === null ? quantity('>', 5000, 'min') : exact(minutes, 'min'), measuredOn: choice('itself'), b0_T: plain(20, 'MHz'), complex_mM: plain(2.5, 'mM'), zinc_mM: plain(2.5, 'mM'),
    phosphate_mM: plain(67, 'mM'), pH: plain(7, ''), temperature_K: plain(37, '°C'), buffer: text('phosphate: 26 mM KH2PO4 and 41 mM Na2HPO4'),
  },
})
