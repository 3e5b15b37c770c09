import { readFileSync } from 'node:fs'
import { JOBS } from '../../server/jobs/index'
import { drainJobs } from '../../server/jobs/runJobs'
import { toBinary } from '../../server/platform/ids'
import { confirmUpload } from '../../server/services/confirmUpload'
import { stageUpload } from '../../server/services/stageUpload'
import type { UploadDraft } from '../../shared/measurements/draft'
import type { Actor } from '../../shared/permissions'
import { canonicalJson } from '../../shared/science/canonical'
import { sealed } from '../../server/platform/hashes'
import type { TestDeps, TestProgramme } from './factory'

export interface TestAgent { complexId: string, batchId: string, code: string, lot: string }

/** An agent with one batch, as short as the tables allow. */
export async function makeAgent(deps: TestDeps, programme: TestProgramme, { code = 'SK-07', lot = 'L1' } = {}): Promise<TestAgent> {
  const [ligandId, complexId, batchId] = [deps.ids.next(), deps.ids.next(), deps.ids.next()]
  const base = { programme_id: toBinary(programme.id), created_by: toBinary(programme.people.chemist.personId), created_at: deps.clock.now() }
  await deps.db('ligand').insert({ ...base, id: toBinary(ligandId), code: `L-${code}` })
  await deps.db('complex').insert({ ...base, id: toBinary(complexId), code, ligand_id: toBinary(ligandId) })
  await deps.db('batch').insert({ ...base, id: toBinary(batchId), complex_id: toBinary(complexId), lot })
  const version = (payload: unknown) => ({ ...base, id: toBinary(deps.ids.next()), version_no: 1, payload: canonicalJson(payload), payload_hash: sealed(payload).hash })
  await deps.db('ligand_version').insert({ ...version({ topology: 'ring' }), ligand_id: toBinary(ligandId) })
  await deps.db('complex_version').insert({ ...version({ mechanism: 'T1' }), complex_id: toBinary(complexId) })
  return { complexId, batchId, code, lot }
}

/** Another batch of the same agent. */
export async function makeBatch(deps: TestDeps, programme: TestProgramme, { complexId, lot }: { complexId: string, lot: string }): Promise<string> {
  const batchId = deps.ids.next()
  await deps.db('batch').insert({ id: toBinary(batchId), programme_id: toBinary(programme.id), complex_id: toBinary(complexId), lot, created_by: toBinary(programme.people.chemist.personId), created_at: deps.clock.now() })
  return batchId
}

export const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text)

export const fixtureBytes = (path: string): Uint8Array => new Uint8Array(readFileSync(new URL(`../../fixtures/${path}`, import.meta.url)))

interface Step { actor?: Actor, fileName?: string }

export async function stage(deps: TestDeps, programme: TestProgramme, content: string | Uint8Array, { actor = programme.people.chemist, fileName = 'table.csv' }: Step = {}): Promise<string> {
  const bytes = typeof content === 'string' ? bytesOf(content) : content
  return (await stageUpload(deps, { actor, programmeId: programme.id, files: [{ fileName, bytes }] })).id
}

/** A file all the way to stored series, their fits still in the queue. */
export async function upload(deps: TestDeps, programme: TestProgramme, { content, draft, actor = programme.people.chemist }: { content: string | Uint8Array, draft: UploadDraft, actor?: Actor }) {
  const id = await stage(deps, programme, content, { actor })
  return confirmUpload(deps, { actor, programmeId: programme.id, id, draft })
}

/** Runs what the programme's commands put into the queue, and nothing of other tests. */
export const runJobs = (deps: TestDeps, programme: TestProgramme): Promise<number> => drainJobs(deps, JOBS, programme.id)

/** Four tubes of three readings: glow = 2 + 5·c, plus what `noise` adds to the last reading of each. */
export function glowTable({ agent = 'SK-07', lot = 'L1', noise = 0.5 } = {}): string {
  const rows = [0, 0.5, 1, 2].flatMap((conc, i) => [1, 2, 3].map(dwell => `${i === 0 ? 'blank,,' : `t${i},${agent},${lot}`},${conc},${dwell},${2 + 5 * conc + (dwell === 3 ? noise * (i + 1) / 4 : 0)}`))
  return ['tube,agent,batch,conc (mM),dwell (s),glow (au)', ...rows].join('\n')
}

export const GLOW_DRAFT: UploadDraft = { kind: 'toy.glow', conditions: { temperature_K: 310.15 } }
