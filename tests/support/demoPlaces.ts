import { readFile } from 'node:fs/promises'
import { DEMO_PASSWORD } from '../../shared/demo'
import type { QueueItemDto } from '../../shared/schemas/check'
import type { DecisionListDto } from '../../shared/schemas/decision'
import type { RecordListDto } from '../../shared/schemas/record'
import type { SeriesListDto } from '../../shared/schemas/series'
import type { StagedUploadDto } from '../../shared/schemas/upload'
import type { AgentDto } from '../../shared/schemas/agent'
import { ApiClient } from './apiClient'

/** Ids of things of the demonstration that pages are about. */
export interface DemoPlaces { series: string, record: string, waitingFit: string, waitingRecord: string, batchVersion: string, decision: string, staged: string }

const BASE = '/api/programmes/skerry'

/** Looks up by the API what the pages of the demonstration are about, and leaves one upload staged. */
export async function demoPlaces(): Promise<DemoPlaces> {
  const [chemist, physicist] = [await signedIn('chemist'), await signedIn('physicist')]
  const { series } = await read<SeriesListDto>(chemist, '/series?agent=SK-07')
  const { records } = await read<RecordListDto>(chemist, '/records')
  const { batches } = await read<AgentDto>(chemist, '/agents/SK-07')
  const queue = await read<QueueItemDto[]>(physicist, '/checks')
  const { decisions } = await read<DecisionListDto>(physicist, '/decisions')
  const waiting = (kind: string) => found(queue.find(one => one.kind === kind), `a waiting ${kind}`).id
  return {
    series: found(series[0], 'a series of SK-07').id, record: found(records.find(one => one.agent === 'SK-07'), 'a record of SK-07').id,
    batchVersion: found(batches[0]?.current, 'a batch of SK-07').id, waitingFit: waiting('fit'), waitingRecord: waiting('record'),
    decision: found(decisions.find(one => one.agent === 'SK-07'), 'a decision on SK-07').id, staged: await stage(chemist),
  }
}

async function signedIn(who: string): Promise<ApiClient> {
  const client = await new ApiClient().open()
  const answer = await client.signIn(`${who}@skerry.example`, DEMO_PASSWORD)
  if (answer.status !== 200) throw new Error(`The ${who} could not sign in: ${answer.text}`)
  return client
}

async function read<T>(client: ApiClient, path: string): Promise<T> {
  const answer = await client.send(`${BASE}${path}`)
  if (answer.status !== 200) throw new Error(`GET ${path}: ${answer.status} ${answer.text.slice(0, 300)}`)
  return answer.body as T
}

async function stage(client: ApiClient): Promise<string> {
  const form = new FormData()
  form.append('file', new Blob([await readFile(new URL('../../fixtures/demo/try-me_SK-08_A1.csv', import.meta.url), 'utf8')]), 'try-me_SK-08_A1.csv')
  const answer = await client.send(`${BASE}/uploads`, { method: 'POST', body: form })
  if (answer.status !== 200) throw new Error(`The file was not staged: ${answer.text}`)
  return (answer.body as StagedUploadDto).id
}

function found<T>(one: T | null | undefined, what: string): T {
  if (one === null || one === undefined) throw new Error(`The demonstration has not ${what}.`)
  return one
}
