import { CAUTION } from '../../shared/caution'
import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import type { RecordDecisionInput } from '../../shared/schemas/decision'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { sealed } from '../platform/hashes'
import { programmeAddressees, programmeCode } from '../queries/addresses'
import { findComplex } from '../queries/complexes'
import { insertDecision, standingDecision } from '../queries/decisions'
import { findProfileVersion } from '../queries/profiles'
import { takeSnapshot } from './takeSnapshot'
import { unitOfWork, type Work } from './unitOfWork'
import type { Knex } from 'knex'

export interface RecordDecisionCommand { actor: Actor, programmeId: string, body: RecordDecisionInput, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Records advance, hold or stop with its reasons. The numbers behind it are frozen with it: signed evidence, placement, chances, profile version, and who
 * signed. The programme is told by mail.
 * @throws AppError('conflict') naming who decided first, when the decision seen is no longer the one that stands
 */
export async function recordDecision(deps: Deps, command: RecordDecisionCommand): Promise<{ id: string }> {
  const { actor, programmeId, body, idempotency } = command
  try {
    return await unitOfWork(deps, { actor, name: 'recordDecision', programmeId, idempotency }, async (work) => {
      const profile = await findProfileVersion(work.trx, programmeId, body.profileVersionId)
      if (!profile) throw new AppError('notFound', 'There is no such profile version in this programme.', { field: 'profileVersionId', accepted: 'a saved version of a profile' })
      const snapshot = await takeSnapshot(work.trx, { programmeId, agentCode: body.agent, profile, personId: actor.personId, at: work.now })
      const before = await standingDecision(work.trx, programmeId, snapshot.agent.complexId)
      if ((before?.id ?? null) !== body.supersedes) throw decidedBefore(before)
      const id = work.id()
      await insertDecision(work.trx, {
        id, programmeId, complexId: snapshot.agent.complexId, profileVersionId: profile.id, outcome: body.outcome, reasons: body.reasons, snapshot: sealed(snapshot), supersedes: body.supersedes,
        personId: actor.personId, at: work.now, evidenceIds: snapshot.evidence.map(item => item.id),
      })
      await tellProgramme(deps, work, { ...command, id, profile: `${profile.name}, version ${profile.versionNo}`, deciderSigned: snapshot.deciderSigned })
      return { result: { id }, subject: `decision ${id}`, payload: { agent: body.agent, outcome: body.outcome, reasons: body.reasons, profile: profile.id, supersedes: body.supersedes } }
    })
  }
  catch (error) {
    if (!isDuplicate(error, 'successor')) throw error
    throw decidedBefore(await standingOf(deps.db, programmeId, body.agent))
  }
}

async function standingOf(db: Knex, programmeId: string, agentCode: string) {
  const complex = await findComplex(db, programmeId, { code: agentCode })
  return complex ? await standingDecision(db, programmeId, complex.id) : null
}

function decidedBefore(standing: { id: string, outcome: string, personName: string, at: Date } | null): AppError {
  if (!standing) return new AppError('conflict', 'No decision stands for this agent, so none can be superseded.', { field: 'supersedes', accepted: 'null, for the first decision' })
  return new AppError('conflict', `${standing.personName} recorded "${standing.outcome}" for this agent at ${standing.at.toISOString()}. Look at it before you decide.`, {
    data: { personName: standing.personName, at: standing.at.toISOString(), decisionId: standing.id, outcome: standing.outcome },
  })
}

const VERBS = { advance: 'advances', hold: 'holds', stop: 'stops' } as const
interface Told extends RecordDecisionCommand { id: string, profile: string, deciderSigned: boolean }

async function tellProgramme(deps: Deps, work: Work, { actor, programmeId, body, id, profile, deciderSigned }: Told): Promise<void> {
  const code = await programmeCode(work.trx, programmeId)
  for (const one of await programmeAddressees(work.trx, programmeId)) {
    await work.sendMail({
      to: one.email, template: 'decision.recorded', dedupeKey: `decision:${id}:${one.personId}`, subject: `Decision on ${body.agent}: ${body.outcome}`,
      body: [
        `${one.name},`, '', `${actor.name} ${VERBS[body.outcome]} ${body.agent}, under the profile ${profile}.`, '', body.reasons, '',
        ...(deciderSigned ? [`${actor.name} signed part of the evidence behind this decision as well.`, ''] : []),
        `${deps.origin}/${code}/decisions/${id}`, '', `Lanthorn. ${CAUTION}`,
      ].join('\n'),
    })
  }
}
