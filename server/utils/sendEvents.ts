import { createEventStream, type H3Event } from 'h3'

/** A stream ends after this long; the browser opens a new one by itself, which asks for the session and the roles again. */
const LONGEST_MS = 15 * 60_000
/** Something is sent at least this often, so that proxies keep the connection. */
const QUIET_MS = 15_000

interface Events { name: string, everyMs: number, read: () => Promise<unknown>, wait: (ms: number) => Promise<void> }

/** Server-sent events: asks `read` again and again and sends its answer when it changed. Ends when the browser goes, when `read` fails, or when its time is over. */
export async function sendEvents(event: H3Event, { name, everyMs, read, wait }: Events): Promise<void> {
  const stream = createEventStream(event)
  const started = Date.now()
  let last = ''
  let lastSent = 0
  let open = true
  stream.onClosed(async () => { open = false })
  const tick = async (): Promise<void> => {
    const answer = await read()
    const text = JSON.stringify(answer)
    const seen = JSON.stringify({ ...answer as object, at: null })
    if (seen === last && Date.now() - lastSent < QUIET_MS) return
    last = seen
    lastSent = Date.now()
    await stream.push({ event: name, data: text })
  }
  const run = async (): Promise<void> => {
    while (open && Date.now() - started < LONGEST_MS) {
      await tick()
      await wait(everyMs)
    }
  }
  run().catch(error => console.error(JSON.stringify({ at: new Date().toISOString(), stream: name, error: error instanceof Error ? error.message : String(error) })))
    .finally(() => { if (open) void stream.close() })
  return stream.send()
}
