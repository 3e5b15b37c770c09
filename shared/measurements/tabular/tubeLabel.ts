import { toStored } from '../../science/units'
import { findUnit, plainWords } from './headerText'
import { UPLOAD_LIMITS } from './limits'
import { parseLooseNumber } from './numberCell'

/** What a tube's name suggests; null where it says nothing. */
export interface LabelGuess {
  role: 'sample' | 'blank'
  conc_mM: number | null
  concSe_mM: number | null
  agent: string | null
  batch: string | null
}

const BLANK_WORDS = ['blank', 'dia', 'diamagnetic', 'water', 'h2o', 'd2o', 'buffer', 'control', 'matrix', 'medium', 'solvent', 'pbs', 'hepes', 'saline', 'plasma', 'serum', 'zero', 'none', 'no agent', 'plain']
const FILLER = /\b(?:tube|vial|sample|probe|nr|no|number|conc|concentration|c|signal|roi|mean)\b/gi
const AMOUNT = /([-+\u2212]?\d+(?:[.,]\d+)?(?:[eE][-+]?\d+)?)\s*(?:±\s*(\d+(?:[.,]\d+)?)\s*)?([mµ\u03BCun]?M(?![A-Za-z\d-])|[mµ\u03BCun]?mol\s?\/\s?[lL]|mol\/m3)/

/** Reads role, concentration, agent and batch out of a tube's name: 'SK-07 0.50 mM', 'blank', '0,5 ± 0,01 mM', 'Gd-DOTA lot 3 250 µM'. */
export function readTubeLabel(full: string): LabelGuess {
  const label = full.slice(0, UPLOAD_LIMITS.wordsLength)
  const amount = AMOUNT.exec(label.replaceAll('_', ' '))
  const conc_mM = amount ? inMillimolar(amount[1], amount[3]) : null
  const concSe_mM = amount?.[2] === undefined ? null : inMillimolar(amount[2], amount[3])
  const rest = amount ? label.replaceAll('_', ' ').replace(amount[0], ' ') : label.replaceAll('_', ' ')
  const isBlank = isBlankName(rest) || conc_mM === 0
  if (isBlank) return { role: 'blank', conc_mM: conc_mM ?? 0, concSe_mM, agent: null, batch: null }
  return { role: 'sample', conc_mM, concSe_mM, ...(amount ? readNames(rest) : { agent: null, batch: null }) }
}

export function isBlankName(text: string): boolean {
  const words = plainWords(text.slice(0, UPLOAD_LIMITS.wordsLength).replace(FILLER, ' ').replace(/[()[\],;:=/]/g, ' '))
  return BLANK_WORDS.includes(words.replace(/\s*\d+$/, ''))
}

function inMillimolar(number: string | undefined, unitText: string | undefined): number | null {
  const parsed = parseLooseNumber(number ?? '')
  const unit = findUnit((unitText ?? '').replace(/\s/g, ''), 'concentration')
  return parsed.ok && unit !== null ? toStored(parsed.value, unit) : null
}

/** What stands beside an amount is the agent's name, unless it only counts tubes ('tube 3', 'T3', '7'). */
export function readNames(name: string): { agent: string | null, batch: string | null } {
  const rest = name.slice(0, UPLOAD_LIMITS.wordsLength)
  const lot = /\b(?:lot|batch)\b[\s:#]*(\S+)/i.exec(rest)
  const words = (lot ? rest.replace(lot[0], ' ') : rest).replace(FILLER, ' ').split(/[\s,;:=|()[\]]+/).filter(word => word !== '')
  const [agent, batch] = words
  if (agent === undefined || /^[A-Za-z]?\d+$/.test(agent)) return { agent: null, batch: lot?.[1] ?? null }
  if (words.length > 2) return { agent: null, batch: lot?.[1] ?? null }
  return { agent, batch: lot?.[1] ?? batch ?? null }
}

/** A tube that says of itself that it is the instrument's reference: 'REF', 'reference tube'. */
export const isReferenceName = (text: string): boolean => /^ref(?:erence)?(?:[\s_-]*(?:tube|vial|sample))?$/i.test(text.trim())
