import type { UploadProblem } from '../types'
import { UPLOAD_LIMITS } from './limits'

interface Where {
  /** Row of the file, from 1. */
  row?: number | null
  /** Column of the file, from 1. */
  column?: number | null
  field?: string | null
}

/** A problem that keeps a file from being stored: what is wrong, and what would be accepted. */
export function blocks(id: string, message: string, accepted: string, where: Where = {}): UploadProblem {
  return { id, message, accepted, row: where.row ?? null, column: where.column ?? null, field: where.field ?? null, severity: 'blocks' }
}

/** A problem that a person may let stand. */
export function asks(id: string, message: string, accepted: string, where: Where = {}): UploadProblem {
  return { ...blocks(id, message, accepted, where), severity: 'asks' }
}

/** Adds a problem. Beyond the limit the last place is kept for one that blocks, so that a file full of faults costs no more and still cannot be stored. */
export function note(problems: UploadProblem[], ...found: readonly UploadProblem[]): void {
  for (const problem of found) {
    if (problems.length < UPLOAD_LIMITS.keptProblems) problems.push(problem)
    else if (problem.severity === 'blocks' && problems.at(-1)?.severity !== 'blocks') problems[problems.length - 1] = problem
  }
}

/** Each problem once, those of the form and the whole file first, then as the file reads; beyond the limit only their number. */
export function listProblems(problems: readonly UploadProblem[]): UploadProblem[] {
  const once = new Map(problems.map(problem => [JSON.stringify([problem.id, problem.row, problem.column, problem.field, problem.message]), problem]))
  const ordered = [...once.values()]
    .map((problem, index) => ({ problem, index }))
    .sort((a, b) => (a.problem.row ?? 0) - (b.problem.row ?? 0) || (a.problem.column ?? 0) - (b.problem.column ?? 0) || a.index - b.index)
    .map(({ problem }) => problem)
  const rest = ordered.slice(UPLOAD_LIMITS.listedProblems)
  if (rest.length === 0) return ordered
  const severity = rest.some(problem => problem.severity === 'blocks') ? blocks : asks
  const more = severity('more', `${problems.length >= UPLOAD_LIMITS.keptProblems ? 'At least ' : ''}${rest.length} more problems of this file are not listed.`, 'the problems above put right first; the list is made anew each time')
  return [...ordered.slice(0, UPLOAD_LIMITS.listedProblems), more]
}

/** Cuts a text of the file for quoting in a sentence. */
export function quoted(text: string): string {
  const flat = text.replace(/\s+/g, ' ').trim()
  return flat.length <= 40 ? `'${flat}'` : `'${flat.slice(0, 37)}...'`
}
