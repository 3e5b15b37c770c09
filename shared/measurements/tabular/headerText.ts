import { parseUnit, type Dimension, type Unit } from '../../science/units'
import type { ColumnSpec } from '../types'
import { UPLOAD_LIMITS } from './limits'

/** What a head says: which column, and in which unit. */
export interface HeaderMatch {
  spec: ColumnSpec
  /** null where the head names none. */
  unit: Unit | null
  /** Text in the place of the unit that is no unit of the column's dimension. */
  unknownUnit: string | null
}

/** Words that heads cut short. */
const WHOLE: Readonly<Record<string, string>> = { inv: 'inversion', sig: 'signal', int: 'intensity', rel: 'relaxation', rep: 'repetition', conc: 'concentration', temp: 'temperature', recov: 'recovery' }

interface Reading { name: string, unit: string | null }

const LOWERED = '₀₁₂₃₄₅₆₇₈₉'

/** Lower case, one space for every run of spaces, underscores and dashes; lowered digits plain. */
export function plainWords(text: string): string {
  return [...text].map(sign => LOWERED.includes(sign) ? String(LOWERED.indexOf(sign)) : sign).join('')
    .toLowerCase()
    .replace(/^[\s#]+/, '')
    .replace(/[\s_\-\u2010-\u2015]+/g, ' ')
    .replace(/\s*[:=]\s*$/, '')
    .replace(/\.(?=\s|$)/g, '')
    .trim()
}

/** A head with more places to split at is a sentence. */
const MOST_READINGS = 24

/** Every way in which a head can be split into name and unit: 'TI (ms)', 'TI [ms]', 'TI / ms', 'TI, ms', 'TI_ms', 'TI ms', 'TI'. */
export function headerReadings(text: string): Reading[] {
  if (text.length > UPLOAD_LIMITS.wordsLength) return [{ name: text.slice(0, UPLOAD_LIMITS.wordsLength), unit: null }]
  const head = text.trim().replace(/\s*[:=]$/, '')
  const readings: Reading[] = [{ name: head, unit: null }]
  const bracket = /^(.*?)\s*[([]\s*([^()[\]]*(?:\([^()]*\))?[^()[\]]*)\s*[)\]]\s*$/.exec(head)
  if (bracket) return [{ name: bracket[1] ?? '', unit: bracket[2] ?? '' }, ...readings]
  for (const mark of [/ \/ /, /\//, /, ?/, / in /, /_per_/, /_/, / /]) {
    for (const found of head.matchAll(new RegExp(mark, 'g'))) {
      const unit = mark.source === '_per_' ? head.slice(found.index + 1) : head.slice(found.index + found[0].length)
      readings.push({ name: head.slice(0, found.index), unit })
    }
  }
  return readings.slice(0, MOST_READINGS)
}

/**
 * Finds the column that a head names, best reading first.
 * @param present stems of columns that other heads name for certain; a column that follows one of them wins over others with the same words
 */
export function matchHeader(text: string, specs: readonly ColumnSpec[], present: readonly string[] = []): HeaderMatch | null {
  if (text.trim() === '') return null
  const ordered = [...specs].sort((a, b) => rank(a, present) - rank(b, present))
  let fallback: HeaderMatch | null = null
  for (const reading of headerReadings(text)) {
    const name = plainWords(reading.name)
    const whole = name.replace(/\b(?:inv|sig|int|rel|rep|conc|temp|recov)\b/g, word => WHOLE[word] ?? word)
    for (const spec of ordered.filter(candidate => candidate.synonyms.includes(name) || candidate.synonyms.includes(whole))) {
      if (reading.unit === null || reading.unit === '') return { spec, unit: null, unknownUnit: null }
      const unit = spec.dimension === 'text' ? null : findUnit(reading.unit, spec.dimension)
      if (unit) return { spec, unit, unknownUnit: null }
      fallback ??= { spec, unit: null, unknownUnit: spec.dimension === 'text' ? null : reading.unit }
    }
  }
  return fallback ?? matchByUnit(text, specs)
}

/** A head that is a substance with a unit of concentration behind it ('NiCl2 (mM)', 'Gd-DOTA / µM') is a column of concentrations. */
function matchByUnit(text: string, specs: readonly ColumnSpec[]): HeaderMatch | null {
  if (text.length > UPLOAD_LIMITS.wordsLength) return null
  const spec = specs.find(candidate => candidate.role === 'conc')
  const match = /^\s*([^()[\]/]*[A-Za-z][^()[\]/]*)(?:[([]([^()[\]]+)[)\]]|\s\/\s(.+))\s*$/.exec(text)
  const unit = spec && spec.dimension !== 'text' ? findUnit(match?.[2] ?? match?.[3] ?? '', spec.dimension) : null
  return spec && unit ? { spec, unit, unknownUnit: null } : null
}

// The metal whose concentration is meant: 'mM Gd', 'mM (Gd)', 'mmol Gd/L' say no other unit.
const METAL = /(?:Gd|Dy|Eu|Tb|Yb|Ho|Er|Tm|Pr|Nd|Sm|La|Lu|Ln|Mn|Fe|Ni|Cu|metal)(?:\s?\(?I{2,3}\)?|\s?[23]\+|³⁺|²⁺)?/

export function findUnit(text: string, dimension: Dimension): Unit | null {
  if (text.length > UPLOAD_LIMITS.wordsLength) return null
  const parsed = parseUnit(text, dimension)
  if (parsed.ok) return parsed.unit
  const bare = text.trim().replace(/^[([]\s*(.*?)\s*[)\]]$/, '$1').replace(/([a-z]{2,})\.$/i, '$1')
  const plain = dimension === 'concentration' ? bare.replace(new RegExp(`\\s*(?:of\\s)?[([]?${METAL.source}[)\\]]?\\s*(?=$|/)`), '').trim() : bare
  const again = plain === text ? parsed : parseUnit(plain, dimension)
  return again.ok ? again.unit : null
}

function rank(spec: ColumnSpec, present: readonly string[]): number {
  if (spec.follows === undefined) return 1
  return present.includes(spec.follows) ? 0 : 2
}
