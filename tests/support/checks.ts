import { toBinary } from '../../server/platform/ids'
import { fitVersions } from '../../server/queries/fits'
import { requestFit } from '../../server/services/requestFit'
import { recallCheck, returnEvidence, withdrawSignature } from '../../server/services/returnEvidence'
import { signEvidence } from '../../server/services/signEvidence'
import { showCheck } from '../../server/services/showCheck'
import { submitForCheck } from '../../server/services/submitForCheck'
import type { CheckSubjectKind } from '../../shared/checks/transitions'
import type { Actor } from '../../shared/permissions'
import { FitRequest } from '../../shared/schemas/fit'
import type { TestDeps, TestProgramme } from './factory'
import { makeProgramme } from './factory'
import { register } from './registry'
import { GLOW_DRAFT, glowTable, runJobs, upload } from './uploads'

/** Steps of a check as different people take them; each names the seq that it answers. */
export function stepsOf(deps: TestDeps, programme: TestProgramme, kind: CheckSubjectKind = 'fit') {
  const { chemist, physicist } = programme.people
  const input = (id: string, expectedSeq: number, comment: string, actor: Actor) => ({ actor, programmeId: programme.id, kind, id, expectedSeq, comment })
  return {
    submit: (id: string, seq = 0, comment = '', actor = chemist) => submitForCheck(deps, input(id, seq, comment, actor)),
    sign: (id: string, seq = 1, actor = physicist, comment = '') => signEvidence(deps, input(id, seq, comment, actor)),
    giveBack: (id: string, seq = 1, comment = 'The blank reads too low; was it water?', actor = physicist) => returnEvidence(deps, input(id, seq, comment, actor)),
    recall: (id: string, seq = 1, actor = chemist) => recallCheck(deps, input(id, seq, '', actor)),
    withdraw: (id: string, seq = 2, comment = 'The stock was assayed wrongly.', actor = physicist) => withdrawSignature(deps, input(id, seq, comment, actor)),
    show: (id: string, actor = physicist) => showCheck(deps, { actor, programmeId: programme.id, kind, id }),
  }
}

/** A programme with one registered agent and one fitted series of the toy kind; `refit` makes the next version. */
export async function fittedSeries(deps: TestDeps, { noise = 0.5 } = {}) {
  const programme = await makeProgramme(deps)
  const agent = await register(deps, programme, { code: 'TS-01' })
  const { series } = await upload(deps, programme, { content: glowTable({ agent: 'TS-01', noise }), draft: GLOW_DRAFT })
  const seriesId = series[0]!.id
  await runJobs(deps, programme)
  const newest = async (): Promise<string> => (await fitVersions(deps.db, programme.id, seriesId))[0]!.id
  const refit = async (request: Partial<FitRequest> = {}, actor = programme.people.physicist): Promise<string> => {
    await requestFit(deps, { actor, programmeId: programme.id, seriesId, request: FitRequest.parse(request) })
    await runJobs(deps, programme)
    return newest()
  }
  return { programme, agent, seriesId, fitId: await newest(), refit, ...programme.people, ...stepsOf(deps, programme) }
}

/** Subject and body of the mails that a programme's commands wrote, oldest first. */
export async function mailsOf(deps: TestDeps, programme: TestProgramme): Promise<{ to: string, subject: string, body: string, template: string }[]> {
  return await deps.db('mail').where({ programme_id: toBinary(programme.id) }).orderBy('created_at').orderBy('id').select('to_address as to', 'subject', 'body', 'template') as { to: string, subject: string, body: string, template: string }[]
}
