import type { StoredExclusion } from '../queries/fits'
import type { Work } from './unitOfWork'

export interface FitOrder {
  seriesId: string
  requestedBy: string
  modelId: string
  options: Readonly<Record<string, number | string | boolean>>
  /** Everything left out, what the parent left out included. */
  exclusions: readonly StoredExclusion[]
  /** Fit that this one follows; null = the first. */
  parentId: string | null
}

/** Puts a fit into the queue, inside a transaction. @returns the job's id */
export function orderFit(work: Work, order: FitOrder): Promise<string> {
  const requestId = work.id()
  return work.enqueue({
    kind: 'fit.run', dedupeKey: `fit:${order.seriesId}:${requestId}`, maxAttempts: 4,
    payload: { ...order, exclusions: order.exclusions.map(one => ({ ...pick(one), at: one.at.toISOString() })) },
  })
}

const pick = ({ tubeNo, pointIndex, reason, personId }: StoredExclusion) => ({ tubeNo, pointIndex, reason, personId })
