import { setTimeout as delay } from 'node:timers/promises'
import { DEMO_AGENTS } from '../../db/seeds/demo/agents'
import { agentBody } from '../../db/seeds/demo/bodies'
import { demoFileText } from '../../db/seeds/demo/forward'
import { DEMO_FILES, type DemoFile } from '../../db/seeds/demo/series'
import { writeMembership } from '../../server/queries/memberships'
import { createProgramme } from '../../server/services/programmes'
import type { ProgrammeRole } from '../../shared/permissions'
import type { SeriesDto } from '../../shared/schemas/series'
import type { ConfirmedDto, StagedUploadDto } from '../../shared/schemas/upload'
import { makeAccount, PASSWORD } from './actors'
import { ApiClient } from './apiClient'
import type { TestDeps } from './factory'
import { readPatiently, sendPatiently } from './patientClient'

export type Phase = 'upload' | 'fit' | 'sign'
export interface KillRun { programme: { id: string, code: string }, chemist: ApiClient, physicist: ApiClient }
export interface Round {
  upload: { id: string, text: string }
  seriesIds: string[]
  fitIds: string[]
  took_ms: Record<Phase, number>
  commands: number
  /** More than `commands` where one had to be sent again. */
  tries: number
}

const AGENTS = DEMO_AGENTS.filter(one => ['SK-01', 'SK-03'].includes(one.code))
const FIT_PATIENCE_MS = 150_000

/** A programme with two agents, a chemist and a physicist who are signed in. */
export async function makeRun(deps: TestDeps, origin: string): Promise<KillRun> {
  const { programmeId: id, code } = await createProgramme(deps, { actor: null, code: 'kills', name: 'Kills', description: '' })
  const [chemist, physicist] = [await makeClient(deps, { origin, id, role: 'chemist' }), await makeClient(deps, { origin, id, role: 'physicist' })]
  for (const agent of AGENTS) await sendPatiently(chemist, `/api/programmes/${code}/agents`, () => agentBody(agent, agent.batches[0]!))
  return { programme: { id, code }, chemist, physicist }
}

async function makeClient(deps: TestDeps, { origin, id, role }: { origin: string, id: string, role: ProgrammeRole }): Promise<ApiClient> {
  const { personId, email } = await makeAccount(deps, { name: role })
  await writeMembership(deps.db, { id: deps.ids.next(), programmeId: id, personId, roles: [role], changedBy: null, at: deps.clock.now() })
  const client = await new ApiClient(origin).open()
  const answer = await client.signIn(email, PASSWORD)
  if (answer.status !== 200) throw new Error(`Signing in failed with ${answer.status}: ${answer.text}`)
  return client
}

/**
 * One file of two agents all the way: staged, confirmed, both fits waited for, sent for checking and signed, both at once. Every command is repeated
 * until it is answered.
 * @param onPhase told as each phase begins
 */
export async function oneRound({ programme, chemist, physicist }: KillRun, number: number, onPhase: (phase: Phase) => void = () => undefined): Promise<Round> {
  const base = `/api/programmes/${programme.code}`
  const text = fileText(number)
  const took_ms = { upload: 0, fit: 0, sign: 0 }
  let [commands, tries] = [0, 0]
  const send = async <T>(client: ApiClient, path: string, body: () => object): Promise<T> => {
    const done = await sendPatiently<T>(client, `${base}${path}`, body)
    commands += 1
    tries += done.tries
    return done.value
  }
  const timed = async <T>(phase: Phase, work: () => Promise<T>): Promise<T> => {
    const begin = Date.now()
    onPhase(phase)
    const value = await work()
    took_ms[phase] = Date.now() - begin
    return value
  }
  const stored = await timed('upload', async () => {
    const staged = await send<StagedUploadDto>(chemist, '/uploads', () => formOf(text, number))
    return await send<ConfirmedDto>(chemist, `/uploads/${staged.id}/confirm`, () => ({ draft: { kind: 'relax.t1.ir' } }))
  })
  const fitIds = await timed('fit', () => Promise.all(stored.series.map(one => firstFit(chemist, `${base}/series/${one.id}`))))
  await timed('sign', () => Promise.all(fitIds.map(async (id) => {
    await send(chemist, `/checks/fit/${id}/submit`, () => ({ expectedSeq: 0, comment: '' }))
    await send(physicist, `/checks/fit/${id}/sign`, () => ({ expectedSeq: 1, comment: '' }))
  })))
  return { upload: { id: stored.uploadId, text }, seriesIds: stored.series.map(one => one.id), fitIds, took_ms, commands, tries }
}

/** A file of the demonstration under another name, and so with another noise. */
function fileText(number: number): string {
  const file: DemoFile = { ...DEMO_FILES[0]!, fileName: `kills-${number}.csv`, referenceT1_s: undefined }
  return demoFileText(file)
}

function formOf(text: string, number: number): FormData {
  const form = new FormData()
  form.append('file', new Blob([text], { type: 'text/csv' }), `kills-${number}.csv`)
  return form
}

async function firstFit(client: ApiClient, path: string): Promise<string> {
  const end = Date.now() + FIT_PATIENCE_MS
  while (Date.now() < end) {
    const { versions } = await readPatiently<SeriesDto>(client, path)
    if (versions[0]) return versions[0].id
    await delay(50)
  }
  throw new Error(`No fit was stored in ${FIT_PATIENCE_MS / 1000} s: ${path}`)
}
