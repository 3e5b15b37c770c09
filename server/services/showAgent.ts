import type { Knex } from 'knex'
import { constantsSideBySide } from '../../shared/evidence/constantConditions'
import { currentEvidence, type EvidenceItemDto } from '../../shared/evidence/item'
import { toAgentEvidence } from '../../shared/evidence/agentEvidence'
import { AppError } from '../../shared/errors'
import type { Scope } from '../../shared/permissions'
import { ComplexPayload, type AgentDto } from '../../shared/schemas/agent'
import { BatchPayload, type BatchDto } from '../../shared/schemas/batch'
import { LigandPayload, type VersionMark } from '../../shared/schemas/ligand'
import { placeAgents } from '../../shared/science/placement/place'
import type { Deps } from '../platform/deps'
import { listBatches, type BatchRow } from '../queries/batches'
import { findCheckState } from '../queries/checks'
import { agentDecisions, agentSeries, findComplex } from '../queries/complexes'
import { readEvidence } from '../queries/evidence'
import { listRecordRows } from '../queries/records'
import { readVersions, type VersionRow } from '../queries/versions'
import { gapsOf } from './agentView'
import { isAllSigned } from './listAgents'
import { proposeFromSmiles } from './proposeFromSmiles'
import { noSuchAgent } from './registryWords'
import { screeningProfile } from './screeningProfile'
import { toRecordRow } from './showRecord'

interface ShowAgentInput { programmeId: string, code: string, scope: Scope }

/** Everything known of one agent. Those who see signed values only see signed evidence, records, series and batches, and no gaps. */
export async function showAgent(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, code, scope }: ShowAgentInput): Promise<AgentDto> {
  const { db } = deps
  const row = await findComplex(db, programmeId, { code })
  if (!row) throw noSuchAgent()
  const isPartner = scope === 'signed'
  const evidence = currentEvidence(await readEvidence(db, programmeId, scope, { complexId: row.id }))
  if (isPartner && evidence.length === 0) throw noSuchAgent()
  const [complexVersions, ligandVersions, batches, records, series, decisions, { profile }] = await Promise.all([
    readVersions(db, 'complex', programmeId, row.id), readVersions(db, 'ligand', programmeId, row.ligandId), showBatches(db, { programmeId, complexId: row.id, isPartner }),
    listRecordRows(db, programmeId, scope, row.id), agentSeries(db, programmeId, row.id, { signedOnly: isPartner }), agentDecisions(db, programmeId, row.id), screeningProfile(db, programmeId),
  ])
  const payload = ComplexPayload.parse(complexVersions[0]!.payload)
  const ligand = LigandPayload.parse(ligandVersions[0]!.payload)
  const identity = { complexId: row.id, code, mechanism: payload.mechanism, topology: ligand.topology }
  const placement = placeAgents([toAgentEvidence(identity, evidence)], profile, { includeUnsigned: !isPartner })[0]!
  return {
    agent: {
      id: row.id, code, metal: payload.metal, mechanism: payload.mechanism, topology: ligand.topology, payload, ...marks(complexVersions), registeredBy: row.personName, registeredAt: row.at.toISOString(),
      signed: isAllSigned(placement, evidence),
    },
    ligand: { id: row.ligandId, code: row.ligandCode, payload: ligand, ...marks(ligandVersions) },
    ...drawn(ligand.smiles), batches, evidence, constantsDiffer: constantsSideBySide(evidence), records: records.map(toRecordRow),
    series: series.map(one => ({
      id: one.id, title: one.title, kind: one.kind, kindTitle: deps.kinds[one.kind]?.title ?? one.kind, lot: one.lot, at: one.at.toISOString(), by: one.personName,
      versionNo: one.newestVersionNo, outcome: one.newestOutcome, checkState: one.checkState,
    })),
    decisions: decisions.map(one => ({ id: one.id, outcome: one.outcome, reasons: one.reasons, by: one.personName, at: one.at.toISOString() })),
    gaps: isPartner ? null : gapsOf(placement.missing),
  }
}

const mark = (row: VersionRow): VersionMark => ({ versionNo: row.versionNo, at: row.at.toISOString(), by: row.personName })
const marks = (rows: readonly VersionRow[]) => ({ version: mark(rows[0]!), versions: rows.map(mark) })

/** A structure that was kept before a rule changed is left undrawn rather than in the way of its numbers. */
function drawn(smiles: string): Pick<AgentDto, 'drawing' | 'formula'> {
  try {
    const { drawing, formula } = proposeFromSmiles(smiles)
    return { drawing, formula }
  }
  catch (error) {
    if (!(error instanceof AppError)) throw error
    return { drawing: null, formula: null }
  }
}

interface BatchParts { programmeId: string, complexId: string, isPartner: boolean }

async function showBatches(db: Knex, { programmeId, complexId, isPartner }: BatchParts): Promise<BatchDto[]> {
  const scope = isPartner ? 'signed' : 'programme'
  const items = (await readEvidence(db, programmeId, scope, { complexId })).filter(item => item.origin.kind === 'batchVersion')
  const rows = await listBatches(db, programmeId, complexId)
  return await Promise.all(rows.map(row => showBatch(db, { row, programmeId, items, isPartner })))
}

async function showBatch(db: Knex, { row, programmeId, items, isPartner }: { row: BatchRow, programmeId: string, items: readonly EvidenceItemDto[], isPartner: boolean }): Promise<BatchDto> {
  const all = await readVersions(db, 'batch', programmeId, row.id)
  const versions = await Promise.all(all.map(async (version) => {
    const item = items.find(one => one.origin.id === version.id)
    const payload = BatchPayload.parse(version.payload)
    const { state, seq } = await findCheckState(db, programmeId, version.id)
    return { id: version.id, mark: mark(version), payload, freeMetal: item?.value ?? null, checkState: payload.freeMetal ? state : null, checkSeq: seq }
  }))
  const visible = isPartner ? versions.filter(one => one.checkState === 'signed') : versions
  return { id: row.id, lot: row.lot, current: visible[0] ?? null, versions: visible }
}
