import { readFile } from 'node:fs/promises'
import { DEMO_PASSWORD } from '../../shared/demo'
import type { QueueItemDto } from '../../shared/schemas/check'
import type { DecisionListDto } from '../../shared/schemas/decision'
import type { InstrumentListDto } from '../../shared/schemas/instrument'
import type { RecordListDto } from '../../shared/schemas/record'
import type { SeriesDto, SeriesListDto } from '../../shared/schemas/series'
import type { TubeSheetList } from '../../shared/schemas/tubeSheet'
import type { ConfirmedDto, StagedUploadDto } from '../../shared/schemas/upload'
import type { AgentDto } from '../../shared/schemas/agent'
import { ApiClient } from './apiClient'
import { readPatiently, sendPatiently } from './patientClient'

/** Ids of things of the demonstration that pages are about. */
export interface DemoPlaces { series: string, record: string, waitingFit: string, waitingRecord: string, batchVersion: string, decision: string, staged: string, instrument: string, sheet: string }

const BASE = '/api/programmes/skerry'

/** Looks up by the API what the pages of the demonstration are about, and leaves one upload staged. */
export async function demoPlaces(): Promise<DemoPlaces> {
  const [chemist, physicist] = [await signedIn('chemist'), await signedIn('physicist')]
  const { series } = await read<SeriesListDto>(chemist, '/series?agent=SK-07')
  const { records } = await read<RecordListDto>(chemist, '/records')
  const { batches } = await read<AgentDto>(chemist, '/agents/SK-07')
  const queue = await read<QueueItemDto[]>(physicist, '/checks')
  const { decisions } = await read<DecisionListDto>(physicist, '/decisions')
  const { instruments } = await read<InstrumentListDto>(chemist, '/instruments')
  const { sheets } = await read<TubeSheetList>(chemist, '/sheets')
  const waiting = (kind: string) => found(queue.find(one => one.kind === kind), `a waiting ${kind}`).id
  return {
    series: found(series[0], 'a series of SK-07').id, record: found(records.find(one => one.agent === 'SK-07'), 'a record of SK-07').id,
    batchVersion: found(batches[0]?.current, 'a batch of SK-07').id, waitingFit: waiting('fit'), waitingRecord: waiting('record'),
    decision: found(decisions.find(one => one.agent === 'SK-07'), 'a decision on SK-07').id, staged: await stage(chemist),
    instrument: found(instruments.find(one => one.name === 'Bay 3'), 'the instrument of bay 3').id, sheet: found(sheets[0], 'a tube sheet').code,
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
  const file = await readFile(new URL('../../fixtures/demo/try-me_SK-08_A1.csv', import.meta.url), 'utf8')
  const { value } = await sendPatiently<StagedUploadDto>(client, `${BASE}/uploads`, () => {
    const form = new FormData()
    form.append('file', new Blob([file]), 'try-me_SK-08_A1.csv')
    return form
  })
  return value.id
}

/** Uploads the file of the README's tour and sends its fit for checking, as the chemist. @returns the fit, which waits */
export async function sendTourFile(): Promise<string> {
  const chemist = await signedIn('chemist')
  const { value } = await sendPatiently<ConfirmedDto>(chemist, `${BASE}/uploads/${await stage(chemist)}/confirm`, () => ({ draft: { kind: 'relax.t1.ir' } }))
  const fit = await firstFit(chemist, found(value.series[0], 'a series of SK-08').id)
  await sendPatiently(chemist, `${BASE}/checks/fit/${fit}/submit`, () => ({ expectedSeq: 0, comment: '' }))
  return fit
}

async function firstFit(client: ApiClient, seriesId: string): Promise<string> {
  for (let tries = 0; tries < 600; tries++) {
    const { versions } = await readPatiently<SeriesDto>(client, `${BASE}/series/${seriesId}`)
    if (versions[0]) return versions[0].id
    await new Promise(resolve => setTimeout(resolve, 100))
  }
  throw new Error('No fit was stored in a minute.')
}

function found<T>(one: T | null | undefined, what: string): T {
  if (one === null || one === undefined) throw new Error(`The demonstration has not ${what}.`)
  return one
}
