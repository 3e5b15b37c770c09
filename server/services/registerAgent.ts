import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import type { RegisterAgentInput } from '../../shared/schemas/agent'
import type { Deps } from '../platform/deps'
import { insertBatch } from '../queries/batches'
import { findComplex, insertComplex } from '../queries/complexes'
import { findLigand, insertLigand } from '../queries/ligands'
import { insertVersion } from '../queries/versions'
import { orTaken, takenBy } from './registryWords'
import { storeBatchVersion } from './storeBatchVersion'
import { unitOfWork, type Work } from './unitOfWork'
import { proposeFromSmiles } from './proposeFromSmiles'

export interface RegisterAgentCommand {
  actor: Actor
  programmeId: string
  body: RegisterAgentInput
  idempotency?: { key: string, request: unknown } | undefined
}

/**
 * One form makes an agent: its ligand (new, or one that is registered), the complex and its first batch, in one transaction.
 * @throws AppError('conflict') naming who has the code; AppError('invalidInput') for a structure that cannot be read; AppError('notFound') for an unknown ligand
 */
export async function registerAgent(deps: Deps, { actor, programmeId, body, idempotency }: RegisterAgentCommand): Promise<{ code: string, complexId: string, batchId: string, batchVersionId: string }> {
  if (body.ligand.kind === 'new') checkStructure(body.ligand.payload.smiles)
  return await unitOfWork(deps, { actor, name: 'registerAgent', programmeId, idempotency }, async (work) => {
    const ligandId = await ligandOf(work, programmeId, actor, body.ligand)
    const { code, payload } = body.complex
    const complexId = work.id()
    await orTaken('code', () => insertComplex(work.trx, { id: complexId, programmeId, code, ligandId, personId: actor.personId, at: work.now }), async () =>
      takenBy({ what: 'Agent', code, field: 'complex.code', by: await findComplex(work.trx, programmeId, { code }, { latest: true }) }))
    await insertVersion(work.trx, 'complex', { id: work.id(), programmeId, parentId: complexId, versionNo: 1, payload, personId: actor.personId, at: work.now })
    const batchId = work.id()
    await insertBatch(work.trx, { id: batchId, programmeId, complexId, lot: body.batch.lot, personId: actor.personId, at: work.now })
    const batchVersionId = await storeBatchVersion(work, { programmeId, personId: actor.personId, complexId, batchId, lot: body.batch.lot, versionNo: 1, payload: body.batch.payload })
    return { result: { code, complexId, batchId, batchVersionId }, subject: `complex ${complexId}`, payload: { ...body, complexId } }
  })
}

async function ligandOf(work: Work, programmeId: string, actor: Actor, ligand: RegisterAgentInput['ligand']): Promise<string> {
  const { code } = ligand
  if (ligand.kind === 'existing') {
    const found = await findLigand(work.trx, programmeId, { code })
    if (!found) throw new AppError('notFound', `No ligand ${code} is registered in this programme.`, { field: 'ligand.code', accepted: 'the code of a ligand of this programme' })
    return found.id
  }
  const id = work.id()
  await orTaken('code', () => insertLigand(work.trx, { id, programmeId, code, personId: actor.personId, at: work.now }), async () =>
    takenBy({ what: 'Ligand', code, field: 'ligand.code', by: await findLigand(work.trx, programmeId, { code }, { latest: true }) }))
  await insertVersion(work.trx, 'ligand', { id: work.id(), programmeId, parentId: id, versionNo: 1, payload: ligand.payload, personId: actor.personId, at: work.now })
  return id
}

/** A structure is kept only if it can be drawn. @throws AppError('invalidInput') on the form's own field */
export function checkStructure(smiles: string, field = 'ligand.payload.smiles'): void {
  try {
    proposeFromSmiles(smiles)
  }
  catch (error) {
    if (!(error instanceof AppError)) throw error
    throw new AppError('invalidInput', error.message, { ...error.details, field })
  }
}
