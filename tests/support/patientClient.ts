import { setTimeout as delay } from 'node:timers/promises'
import { v7 } from 'uuid'
import type { ApiAnswer, ApiClient } from './apiClient'

const PATIENCE_MS = 90_000
const PAUSE_MS = 100

/**
 * Sends a command as the browser does when the line drops: under one Idempotency-Key, again until an answer comes. Where there is no answer, or
 * the server says that it cannot, nobody knows yet whether it was done.
 * @throws Error when it is refused, or no answer came in a minute and a half
 */
export async function sendPatiently<T>(client: ApiClient, path: string, body: () => object): Promise<{ value: T, tries: number }> {
  const headers = { 'idempotency-key': v7() }
  const { answer, tries } = await untilAnswered(() => client.send(path, { method: 'POST', body: body(), headers }))
  if (answer.status !== 200) throw new Error(`POST ${path} was refused with ${answer.status}: ${answer.text.slice(0, 400)}`)
  return { value: answer.body as T, tries }
}

/** Reads until the server answers. */
export async function readPatiently<T>(client: ApiClient, path: string): Promise<T> {
  const { answer } = await untilAnswered(() => client.send(path))
  if (answer.status !== 200) throw new Error(`GET ${path} was refused with ${answer.status}: ${answer.text.slice(0, 400)}`)
  return answer.body as T
}

async function untilAnswered(ask: () => Promise<ApiAnswer>): Promise<{ answer: ApiAnswer, tries: number }> {
  const end = Date.now() + PATIENCE_MS
  for (let tries = 1; ; tries++) {
    const answer = await ask().catch(whenUnreachable)
    if (answer !== null && answer.status < 500) return { answer, tries }
    if (Date.now() > end) throw new Error(`No answer in ${PATIENCE_MS / 1000} s${answer ? `: ${answer.status} ${answer.text.slice(0, 400)}` : ''}.`)
    await delay(PAUSE_MS)
  }
}

/** What fetch throws when the connection is refused or breaks off; anything else is a mistake of the test. */
function whenUnreachable(error: unknown): null {
  if (error instanceof TypeError) return null
  throw error
}
