import { readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import type { UploadDraft } from '#shared/measurements/draft'
import { readText } from '#shared/measurements/tabular/readText'
import { understandTable } from '#shared/measurements/tabular/understand'
import type { Understood } from '#shared/measurements/tabular/understood'
import type { MeasurementKind, UploadProblem } from '#shared/measurements/types'

export function uploadBytes(path: string): Uint8Array {
  return new Uint8Array(readFileSync(fileURLToPath(new URL(`../../fixtures/uploads/${path}`, import.meta.url))))
}

/** Text of an upload, or the problem that keeps it from being one. */
export function readUpload(path: string): { text: string | null, problem: UploadProblem | null } {
  const read = readText(uploadBytes(path))
  return read.ok ? { text: read.text, problem: null } : { text: null, problem: read.problem }
}

export function understandUpload(path: string, kind: MeasurementKind, draft: UploadDraft = {}): Understood {
  const { text, problem } = readUpload(path)
  if (text === null) throw new Error(problem?.message)
  return understandTable({ text, kind, draft })
}

/** Conditions that satisfy the form of an inversion recovery, in stored units. */
export const RECOVERY_FORM = {
  instrument: 'Scanner 2', b0_T: 3, temperature_K: 310.15, temperatureSd_K: 0.2, pH: 7.4, medium: 'plasma', concBasis: 'icp', concScaleError_frac: 0.015,
  timing: 'longTr', signalForm: 'signed',
} as const

/** Problems that stand in the way of storing, as 'id row column'. */
export function blocking(understood: Understood): string[] {
  return understood.problems.filter(problem => problem.severity === 'blocks').map(problem => `${problem.id} ${problem.row ?? '-'} ${problem.column ?? '-'}`)
}
