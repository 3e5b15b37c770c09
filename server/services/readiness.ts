import type { Knex } from 'knex'
import type { Actor } from '../../shared/permissions'
import { readinessFindings, readinessGaps } from '../../shared/readiness'
import type { EnterReadiness, FrozenReadiness, ReadinessDto } from '../../shared/schemas/readiness'
import type { Deps } from '../platform/deps'
import { sealed } from '../platform/hashes'
import { listBatches } from '../queries/batches'
import { type ComplexRow, findComplex } from '../queries/complexes'
import { insertReadiness, type ReadinessRow, readinessVersions } from '../queries/readiness'
import { changedMeanwhile, noSuchAgent, orTaken } from './registryWords'
import { unitOfWork } from './unitOfWork'

/** The readiness list of an agent with what it lacks and the versions before it. @throws AppError('notFound') */
export async function showReadiness(deps: Pick<Deps, 'db'>, { programmeId, code }: { programmeId: string, code: string }): Promise<ReadinessDto> {
  const complex = await findComplex(deps.db, programmeId, { code })
  if (!complex) throw noSuchAgent()
  const rows = await readinessVersions(deps.db, programmeId, complex.id)
  return { ...await listOf(deps.db, programmeId, complex, rows), history: rows.map(row => ({ id: row.id, versionNo: row.versionNo, by: row.personName, at: row.at.toISOString(), reason: row.reason })) }
}

/** What a decision freezes of the list. */
export async function readinessOf(db: Knex, programmeId: string, complex: Pick<ComplexRow, 'id' | 'code'>): Promise<FrozenReadiness> {
  return listOf(db, programmeId, complex, await readinessVersions(db, programmeId, complex.id))
}

async function listOf(db: Knex, programmeId: string, { id, code }: Pick<ComplexRow, 'id' | 'code'>, [newest]: readonly ReadinessRow[]): Promise<FrozenReadiness> {
  const batches = (await listBatches(db, programmeId, id)).map(batch => batch.lot)
  return {
    agent: code, batches, gaps: readinessGaps(newest?.payload ?? null, batches.length), findings: newest ? readinessFindings(newest.payload) : [],
    entry: newest ? { id: newest.id, versionNo: newest.versionNo, by: newest.personName, at: newest.at.toISOString(), reason: newest.reason, payload: newest.payload } : null,
  }
}

interface EnterCommand { actor: Actor, programmeId: string, code: string, body: EnterReadiness, idempotency?: { key: string, request: unknown } | undefined }

/** Enters the next version of an agent's readiness list; those before stay. @throws AppError('conflict') when `basedOn` is not the newest */
export async function enterReadiness(deps: Deps, { actor, programmeId, code, body, idempotency }: EnterCommand): Promise<{ id: string, versionNo: number }> {
  return await unitOfWork(deps, { actor, name: 'enterReadiness', programmeId, idempotency }, async (work) => {
    const complex = await findComplex(work.trx, programmeId, { code })
    if (!complex) throw noSuchAgent()
    const [newest] = await readinessVersions(work.trx, programmeId, complex.id)
    const refuse = async () => changedMeanwhile(`The readiness list of ${code}`, (await readinessVersions(work.trx, programmeId, complex.id, { latest: true }))[0] ?? null)
    if ((newest?.versionNo ?? 0) !== body.basedOn) throw await refuse()
    const [id, versionNo] = [work.id(), body.basedOn + 1]
    await orTaken('version', () => insertReadiness(work.trx, {
      id, programmeId, complexId: complex.id, versionNo, supersedes: newest?.id ?? null, payload: sealed(body.payload).text, reason: body.reason, personId: actor.personId, at: work.now,
    }), refuse)
    return { result: { id, versionNo }, subject: `agent ${complex.id}`, payload: { code, versionNo, ...body } }
  })
}
