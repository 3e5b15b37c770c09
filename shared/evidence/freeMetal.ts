import type { BatchPayload } from '../schemas/batch'
import type { EvidenceDraft } from './types'
import { draftOf } from './records/common'

/** What a batch says about an agent: its free metal, exact or below the detection limit. Nothing where it was not measured. */
export function evidenceOfBatch(payload: BatchPayload, lot: string): EvidenceDraft[] {
  const { freeMetal } = payload
  if (!freeMetal) return []
  const stored = freeMetal.kind === '='
    ? { value: freeMetal.value_frac, kind: '=' as const, se: freeMetal.se_frac }
    : { value: freeMetal.detectionLimit_frac, kind: '<' as const, se: null }
  return [draftOf({ quantity: 'freeMetal_frac', stored, conditions: {}, detail: { lot, method: freeMetal.method, detectionLimit_frac: freeMetal.detectionLimit_frac } })]
}
