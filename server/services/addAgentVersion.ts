import type { Actor } from '../../shared/permissions'
import type { AgentVersionInput } from '../../shared/schemas/agent'
import type { Deps } from '../platform/deps'
import { findComplex } from '../queries/complexes'
import { insertVersion, readVersions, whoAddedVersion } from '../queries/versions'
import { checkStructure } from './registerAgent'
import { changedMeanwhile, noSuchAgent, orTaken } from './registryWords'
import { unitOfWork } from './unitOfWork'

export interface AgentVersionCommand { actor: Actor, programmeId: string, code: string, body: AgentVersionInput, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Adds a version to an agent's complex or to its ligand; every other agent with that ligand sees it too. The reason stands in the audit trail.
 * @throws AppError('conflict') when `basedOn` is not the newest version
 */
export async function addAgentVersion(deps: Deps, { actor, programmeId, code, body, idempotency }: AgentVersionCommand): Promise<{ id: string, versionNo: number }> {
  if (body.part === 'ligand') checkStructure(body.payload.smiles, 'payload.smiles')
  return await unitOfWork(deps, { actor, name: 'addAgentVersion', programmeId, idempotency }, async (work) => {
    const complex = await findComplex(work.trx, programmeId, { code })
    if (!complex) throw noSuchAgent()
    const parentId = body.part === 'ligand' ? complex.ligandId : complex.id
    const versionNo = body.basedOn + 1
    const refuse = async () => changedMeanwhile(body.part === 'ligand' ? `Ligand ${complex.ligandCode}` : `Agent ${code}`, await whoAddedVersion(work.trx, body.part, programmeId, parentId, versionNo))
    const newest = (await readVersions(work.trx, body.part, programmeId, parentId))[0]!
    if (newest.versionNo !== body.basedOn) throw await refuse()
    const id = work.id()
    await orTaken('version', () => insertVersion(work.trx, body.part, { id, programmeId, parentId, versionNo, payload: body.payload, personId: actor.personId, at: work.now }), refuse)
    return { result: { id, versionNo }, subject: `${body.part} ${parentId}`, payload: { code, versionNo, reason: body.reason, payload: body.payload } }
  })
}
