import { understandTable } from '#shared/measurements/tabular/understand'
import type { UploadDraft } from '#shared/measurements/draft'
import type { Understood } from '#shared/measurements/tabular/understood'
import type { AnalysisInput, AnalysisOutcome, MeasurementKind } from '#shared/measurements/types'
import type { EvidenceDraft } from '#shared/evidence/types'
import { createRandom } from '#shared/science/random'

export const SOLUTION = ['Signal: relaxation rate', 'Temperature: 25.0 °C', 'Ionic strength: 1 M', 'Electrolyte: KCl', 'Which acid: HCl', 'Complex: 1 mM']
export const OWNER = { complexCode: 'SK-07', lot: 'B2' }

/** Reads a table as its kind does. */
export const readAs = (kind: MeasurementKind, lines: readonly string[], draft: UploadDraft = OWNER): Understood => understandTable({ text: lines.join('\n'), kind, draft })
export const blocking = (understood: Understood): string[] => understood.problems.filter(problem => problem.severity === 'blocks').map(problem => problem.id)

/** Input of an analysis from a table that can be stored. */
export function inputFrom(kind: MeasurementKind, lines: readonly string[], change: Partial<AnalysisInput> = {}): AnalysisInput {
  const understood = readAs(kind, lines)
  if (!understood.canStore) throw new Error(understood.problems.map(problem => `${problem.message} [${problem.accepted}]`).join('\n'))
  return { kind: kind.kind, conditions: understood.conditions, tubes: understood.series[0]!.tubes, exclusions: [], modelId: kind.defaultModel(understood.conditions), options: {}, seed: 'kinetics', ...change }
}

export function done(kind: MeasurementKind, input: AnalysisInput): Extract<AnalysisOutcome, { ok: true }> {
  const outcome = kind.analyse(input)
  if (!outcome.ok) throw new Error(`${outcome.reason}: ${outcome.message}`)
  return outcome
}

/** Evidence of a table by quantity. */
export function evidenceOf(kind: MeasurementKind, input: AnalysisInput): Record<string, EvidenceDraft> {
  return Object.fromEntries(kind.evidence(done(kind, input), input).map(draft => [draft.quantity, draft]))
}

export interface FlaskPlan { name: string, rate_per_s: number, acid_M?: number, pH?: number, zn_mM?: number, temperature_C?: number }

export const TIMES_h = [0, 1, 2, 4, 7, 12, 20, 35, 60, 100]

/** Signals of flasks that lose their complex: from 5 to 2, with seeded noise. The times of each flask follow its own rate where none are given. */
export function courseSignals(flasks: readonly FlaskPlan[], { seed = 'flasks', noise = 0.01, times_h = TIMES_h }: { seed?: string, noise?: number, times_h?: readonly number[] } = {}): number[][] {
  const random = createRandom(seed)
  return flasks.map(({ rate_per_s }) => times_h.map(time_h => Number((2 + 3 * Math.exp(-rate_per_s * time_h * 3600) + noise * random.normal()).toFixed(5))))
}
