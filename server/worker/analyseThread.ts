import { MEASUREMENTS } from '../../shared/measurements/index'
import type { AnalysisInput, AnalysisOutcome } from '../../shared/measurements/types'

/** One analysis in a thread of its own: JSON in, JSON out, nothing but shared code inside. */
export default function analyse(input: AnalysisInput): AnalysisOutcome {
  const kind = MEASUREMENTS[input.kind]
  if (!kind) throw new Error(`No measurement kind is called ${input.kind}.`)
  return kind.analyse(input)
}
