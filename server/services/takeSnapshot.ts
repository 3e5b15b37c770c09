import { AppError } from '../../shared/errors'
import type { DecisionSnapshot } from '../../shared/schemas/decision'
import { drawChances } from '../../shared/science/placement/draws'
import { placeAgents } from '../../shared/science/placement/place'
import type { Knex } from 'knex'
import { findComplex } from '../queries/complexes'
import { signaturesOf } from '../queries/decisions'
import type { ProfileVersionRow } from '../queries/profiles'
import { readAgents } from './agentView'
import { engineOf } from './engine'
import { readinessOf } from './readiness'
import { mapSeed } from './showMap'

const SIGNED_ONLY = { includeUnsigned: false }

interface SnapshotInput { programmeId: string, agentCode: string, profile: ProfileVersionRow, personId: string, at: Date }

interface GroundInput { programmeId: string, agentCode: string, profile: Pick<ProfileVersionRow, 'payload'> }

/** Where an agent stands on signed evidence only, under one saved profile version, among the others of its programme. */
export async function readGround(db: Knex, { programmeId, agentCode, profile }: GroundInput) {
  const complex = await findComplex(db, programmeId, { code: agentCode })
  if (!complex) throw new AppError('notFound', `There is no agent ${agentCode} in this programme.`, { field: 'agent', accepted: 'the code of a registered agent' })
  const agents = (await readAgents(db, programmeId, 'programme')).map(view => ({
    view, signed: { ...view.placement, evidence: view.placement.evidence.filter(item => item.signed) },
  }))
  const agentEvidence = agents.map(one => one.signed)
  const placements = placeAgents(agentEvidence, profile.payload, SIGNED_ONLY)
  const placement = placements.find(one => one.complexId === complex.id)!
  const evidence = agents.find(one => one.view.row.id === complex.id)!.view.evidence.filter(item => item.signed && placement.evidenceIds.includes(item.id))
  return { complex, agentEvidence, placements, placement, evidence }
}

/** What stands behind a decision at this moment, with the draws and who signed what. */
export async function takeSnapshot(db: Knex, { programmeId, agentCode, profile, personId, at }: SnapshotInput): Promise<DecisionSnapshot> {
  const { complex, agentEvidence, placements, placement, evidence: used } = await readGround(db, { programmeId, agentCode, profile })
  const chances = drawChances(agentEvidence, profile.payload, { ...SIGNED_ONLY, seed: mapSeed(programmeId) }).find(one => one.complexId === complex.id)!
  const signatures = await signaturesOf(db, programmeId, [...new Set(used.map(item => item.origin.id))])
  return {
    takenAt: at.toISOString(),
    profile: { versionId: profile.id, name: profile.name, versionNo: profile.versionNo, payload: profile.payload },
    agent: { complexId: complex.id, code: complex.code }, placement, chances, evidence: used,
    signatures: signatures.map(({ subjectKind, subjectId, personName, at: signedAt }) => ({ subjectKind, subjectId, personName, at: signedAt.toISOString() })),
    front: placements.filter(one => one.onFront).map(one => one.code).sort(),
    seed: mapSeed(programmeId), engine: engineOf(), readiness: await readinessOf(db, programmeId, complex),
    deciderSigned: signatures.some(one => one.personId === personId),
  }
}
