import type { Knex } from 'knex'
import { EvidenceItemDto } from '../../shared/evidence/item'
import type { EvidenceDraft } from '../../shared/evidence/types'
import type { Scope } from '../../shared/permissions'
import { sealed } from '../platform/hashes'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'

export type OriginKind = 'fit' | 'record' | 'batchVersion'

export interface NewEvidence {
  id: string
  programmeId: string
  complexId: string
  batchId: string | null
  origin: { kind: OriginKind, id: string }
  draft: EvidenceDraft
  at: Date
}

/** Stores what a fit or record emits; the exact numbers are the canonical text, the DOUBLE columns only filter and sort. */
export async function insertEvidence(trx: Knex, one: NewEvidence): Promise<void> {
  const { text, hash } = sealed(one.draft)
  await trx('evidence').insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), quantity: one.draft.quantity, complex_id: toBinary(one.complexId), batch_id: toBinaryOrNull(one.batchId),
    fit_id: originColumn(one, 'fit'), record_id: originColumn(one, 'record'), batch_version_id: originColumn(one, 'batchVersion'),
    value: one.draft.value.value, value_kind: one.draft.value.kind, unit: one.draft.value.unit, payload: text, payload_hash: hash, created_at: one.at,
  })
}

const originColumn = (one: NewEvidence, kind: OriginKind) => one.origin.kind === kind ? toBinary(one.origin.id) : null

interface Raw {
  id: Buffer, complex_id: Buffer, batch_id: Buffer | null, fit_id: Buffer | null, record_id: Buffer | null, batch_version_id: Buffer | null
  payload: string, check_state: EvidenceItemDto['checkState'] | null, chain_id: Buffer, version_no: number
}

/**
 * Evidence of a programme in the order it came, with the state of its check. Fits of withdrawn and corrected series are left out unless
 * `withGone` asks for them, for numbers that a decision froze; a 'signed' scope sees signed only.
 * Which version of a chain counts is for currentEvidence() to say.
 */
export async function readEvidence(db: Knex, programmeId: string, scope: Scope, filter: { complexId?: string, ids?: readonly string[], withGone?: boolean } = {}): Promise<EvidenceItemDto[]> {
  const rows = await db('evidence as e')
    .leftJoin('check_current as c', 'c.subject_id', 'e.origin_id')
    .leftJoin('fit as f', 'f.id', 'e.fit_id').leftJoin('record as r', 'r.id', 'e.record_id').leftJoin('batch_version as b', 'b.id', 'e.batch_version_id')
    .where('e.programme_id', toBinary(programmeId))
    .modify((query) => {
      if (!filter.withGone) {
        void query.whereNotExists(db('series_event as w').whereRaw('w.series_id = f.series_id').where('w.event', 'withdrawn').select(db.raw('1')))
          .whereNotExists(db('series as s').whereRaw('s.replaces = f.series_id').select(db.raw('1')))
      }
      if (scope === 'signed') void query.where('c.state', 'signed')
      if (filter.complexId) void query.where('e.complex_id', toBinary(filter.complexId))
      if (filter.ids) void query.whereIn('e.id', filter.ids.map(toBinary))
    })
    .orderBy('e.id')
    .select('e.id', 'e.complex_id', 'e.batch_id', 'e.fit_id', 'e.record_id', 'e.batch_version_id', 'e.payload', 'c.state as check_state',
      db.raw('COALESCE(f.series_id, r.root_id, b.batch_id) AS chain_id'), db.raw('COALESCE(f.version_no, r.version_no, b.version_no) AS version_no')) as Raw[]
  return rows.map(toItem)
}

function toItem(row: Raw): EvidenceItemDto {
  const draft = JSON.parse(row.payload) as EvidenceDraft
  const id = fromBinary(row.id)
  const checkState = row.check_state ?? 'draft'
  return EvidenceItemDto.parse({
    id, quantity: draft.quantity, complexId: fromBinary(row.complex_id), batchId: fromBinaryOrNull(row.batch_id), value: { ...draft.value, evidenceId: id }, conditions: draft.conditions,
    covarianceGroup: draft.covarianceGroup, detail: draft.detail, signed: checkState === 'signed', checkState,
    origin: {
      kind: row.fit_id ? 'fit' : row.record_id ? 'record' : 'batchVersion', id: fromBinary((row.fit_id ?? row.record_id ?? row.batch_version_id)!),
      chainId: fromBinary(row.chain_id), versionNo: Number(row.version_no),
    },
  })
}
