import { z } from 'zod'
import { CovarianceGroup } from './types'
import { Quantity } from './quantity'

/** Where a piece of evidence came from; 'chain' is what newer versions replace: a series, a record, a batch. */
export const EvidenceOrigin = z.object({
  kind: z.enum(['fit', 'record', 'batchVersion']),
  id: z.string(),
  chainId: z.string(),
  versionNo: z.number().int(),
})

/** Evidence as map, agent page and decisions read it. `signed` is read at the time of asking. */
export const EvidenceItemDto = z.object({
  id: z.string(),
  quantity: z.string(),
  complexId: z.string(),
  batchId: z.string().nullable(),
  value: Quantity,
  conditions: z.record(z.string(), z.union([z.number(), z.string(), z.null()])),
  covarianceGroup: CovarianceGroup.nullable(),
  detail: z.record(z.string(), z.union([z.number(), z.string(), z.boolean(), z.null(), z.array(z.number())])),
  signed: z.boolean(),
  checkState: z.enum(['draft', 'waiting', 'firstSigned', 'signed', 'returned', 'recalled', 'withdrawn']),
  origin: EvidenceOrigin,
})
export type EvidenceItemDto = z.output<typeof EvidenceItemDto>

/**
 * Of several versions of one chain the one that counts: the newest signed, or the newest of all where none is signed. A version that was signed and
 * withdrawn does not count as signed.
 */
export function currentEvidence(items: readonly EvidenceItemDto[]): EvidenceItemDto[] {
  const versions = new Map<string, { signed: number, newest: number }>()
  for (const { origin, signed } of items) {
    const known = versions.get(origin.chainId) ?? { signed: 0, newest: 0 }
    versions.set(origin.chainId, { signed: signed ? Math.max(known.signed, origin.versionNo) : known.signed, newest: Math.max(known.newest, origin.versionNo) })
  }
  return items.filter(({ origin }) => {
    const { signed, newest } = versions.get(origin.chainId)!
    return origin.versionNo === (signed || newest)
  })
}
