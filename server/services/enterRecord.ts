import { AppError } from '../../shared/errors'
import { fieldsOf, type RecordContext, type RecordKind } from '../../shared/evidence/records/define'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import { recordKind } from '../../shared/evidence/records/index'
import { validateEntry } from '../../shared/evidence/records/validate'
import { conditionsOf } from '../../shared/evidence/records/values'
import { plainNotation } from '../../shared/notation'
import type { Actor } from '../../shared/permissions'
import { ComplexPayload } from '../../shared/schemas/agent'
import { LigandPayload } from '../../shared/schemas/ligand'
import type { EnterRecordInput } from '../../shared/schemas/record'
import type { SourceInput } from '../../shared/schemas/source'
import type { Knex } from 'knex'
import type { Deps } from '../platform/deps'
import { findBatch } from '../queries/batches'
import { findComplex, type ComplexRow } from '../queries/complexes'
import { insertEvidence } from '../queries/evidence'
import { insertRecord } from '../queries/records'
import { insertSource } from '../queries/sources'
import { readVersions } from '../queries/versions'
import { noSuchAgent, noSuchBatch } from './registryWords'
import { unitOfWork, type Work } from './unitOfWork'

export interface EnterRecordCommand { actor: Actor, programmeId: string, body: EnterRecordInput, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Keeps a typed record with its source and the evidence that follows from it, in one transaction. Thermodynamic and kinetic records go the same way:
 * the registry of kinds says what is asked and what comes out.
 * @throws AppError('invalidInput') with every field at fault in data.issues
 */
export async function enterRecord(deps: Deps, { actor, programmeId, body, idempotency }: EnterRecordCommand): Promise<{ id: string, rootId: string, versionNo: number }> {
  const kind = kindOf(body.kind)
  return await unitOfWork(deps, { actor, name: 'enterRecord', programmeId, idempotency }, async (work) => {
    const complex = await findComplex(work.trx, programmeId, { code: body.agent })
    if (!complex) throw noSuchAgent()
    const id = work.id()
    await storeRecordVersion(work, { programmeId, actor, kind, complex, lot: body.lot, entry: body.entry, source: body.source, id, rootId: id, versionNo: 1, replaces: null, reason: null })
    return { result: { id, rootId: id, versionNo: 1 }, subject: `record ${id}`, payload: body }
  })
}

export function kindOf(name: string): RecordKind {
  const kind = recordKind(name)
  if (!kind) throw new AppError('invalidInput', `No kind of record is called "${name}".`, { field: 'kind', accepted: 'one of the kinds that the form offers' })
  return kind
}

export interface RecordVersionParts {
  programmeId: string, actor: Actor, kind: RecordKind, complex: ComplexRow, lot: string | null, entry: RecordEntry, source: SourceInput
  id: string, rootId: string, versionNo: number, replaces: string | null, reason: string | null
}

/** One version of a record, its source and its evidence, inside the command that makes it. */
export async function storeRecordVersion(work: Work, one: RecordVersionParts): Promise<void> {
  const { programmeId, actor, kind, complex, entry } = one
  const context = await recordContext(work.trx, programmeId, complex)
  refuseProblems(kind, entry, context)
  const batchId = one.lot === null ? null : await batchOf(work.trx, programmeId, complex.id, one.lot)
  const sourceId = work.id()
  await insertSource(work.trx, { ...one.source, id: sourceId, programmeId, personId: actor.personId, at: work.now })
  const payload = { kindVersion: kind.version, metal: context.metal, entry, reason: one.reason }
  await insertRecord(work.trx, {
    id: one.id, programmeId, rootId: one.rootId, versionNo: one.versionNo, replaces: one.replaces, kind: kind.kind, complexId: complex.id, batchId, payload,
    conditions: conditionsOf(kind, entry), sourceId, personId: actor.personId, at: work.now,
  })
  for (const draft of kind.emits(entry, context)) {
    await insertEvidence(work.trx, { id: work.id(), programmeId, complexId: complex.id, batchId, origin: { kind: 'record', id: one.id }, draft, at: work.now })
  }
}

/** What the record itself does not say: the metal of the agent, and the protonation constants registered with its ligand. */
export async function recordContext(db: Knex, programmeId: string, complex: ComplexRow): Promise<RecordContext> {
  const [complexVersion] = await readVersions(db, 'complex', programmeId, complex.id)
  const [ligandVersion] = await readVersions(db, 'ligand', programmeId, complex.ligandId)
  const { metal } = ComplexPayload.parse(complexVersion!.payload)
  const { protonation } = LigandPayload.parse(ligandVersion!.payload)
  if (!protonation) return { metal, ligandProtonation: null }
  const { stepwiseLogK: steps, temperature_K, ionicStrength_M, medium } = protonation
  return { metal, ligandProtonation: { steps, temperature_K, ionicStrength_M, medium } }
}

async function batchOf(db: Knex, programmeId: string, complexId: string, lot: string): Promise<string> {
  const batch = await findBatch(db, programmeId, complexId, lot)
  if (!batch) throw noSuchBatch()
  return batch.id
}

function refuseProblems(kind: RecordKind, entry: RecordEntry, context: RecordContext): void {
  const problems = validateEntry(kind, entry, context)
  const [first] = problems
  if (!first) return
  const order = fieldsOf(kind).map(field => field.key)
  const issues = problems.map(({ field, message, accepted }) => ({ field: `entry.${field}`, message: plainNotation(message), accepted: plainNotation(accepted) }))
    .sort((a, b) => order.indexOf(a.field.slice(6)) - order.indexOf(b.field.slice(6)))
  throw new AppError('invalidInput', issues[0]!.message, { field: issues[0]!.field, accepted: issues[0]!.accepted, data: { issues } })
}
