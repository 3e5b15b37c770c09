import type { ProgressDto } from '#shared/schemas/progress'

const POLL_MS = 3_000
/** A stream that cannot be opened is asked for by polling, and tried again after this long. */
const RETRY_MS = 60_000

/**
 * Hears of a programme's jobs through one open stream for all tabs of the browser: the tab that holds the lock listens and tells the others. A hidden tab
 * lets go, so that one that is looked at takes over. Where locks are missing (plain HTTP beyond loopback) each visible tab has its own stream, and where
 * no stream can be held it polls.
 * @returns stop
 */
export function openProgressStream(programmeCode: string, tell: (progress: ProgressDto) => void): () => void {
  const url = `/api/programmes/${encodeURIComponent(programmeCode)}/progress`
  const name = `lanthorn-progress:${programmeCode}`
  const channel = typeof BroadcastChannel === 'undefined' ? null : new BroadcastChannel(name)
  let letGo: (() => void) | null = null
  let stopped = false
  if (channel) channel.onmessage = ({ data }: MessageEvent<ProgressDto>) => tell(data)
  const heard = (progress: ProgressDto): void => {
    tell(progress)
    channel?.postMessage(progress)
  }

  function take(): void {
    if (stopped || letGo || document.hidden) return
    if (!channel || !navigator.locks) {
      letGo = listen(url, heard)
      return
    }
    const waiting = new AbortController()
    letGo = () => waiting.abort()
    navigator.locks.request(name, { signal: waiting.signal }, () => new Promise<void>((release) => {
      const close = listen(url, heard)
      letGo = () => {
        close()
        release()
      }
      if (waiting.signal.aborted) letGo()
    })).catch((error: unknown) => { if (!waiting.signal.aborted) throw error })
  }
  function release(): void {
    letGo?.()
    letGo = null
  }
  const look = (): void => document.hidden ? release() : take()
  document.addEventListener('visibilitychange', look)
  take()
  return () => {
    stopped = true
    document.removeEventListener('visibilitychange', look)
    release()
    channel?.close()
  }
}

/** One stream, or polling while there can be none. @returns close */
function listen(url: string, heard: (progress: ProgressDto) => void): () => void {
  let timer: ReturnType<typeof setTimeout> | undefined
  let closed = false
  let source: EventSource | null = null

  function open(): void {
    if (closed) return
    source = new EventSource(url)
    source.addEventListener('progress', event => heard(JSON.parse((event as MessageEvent<string>).data) as ProgressDto))
    source.onerror = () => {
      // CONNECTING: the browser tries again by itself. CLOSED: it was refused, so ask in another way for a while.
      if (source?.readyState !== EventSource.CLOSED) return
      source = null
      poll(Date.now() + RETRY_MS)
    }
  }
  function poll(until: number): void {
    if (closed) return
    // A question without an answer is asked again; the page keeps what it last heard.
    $fetch<ProgressDto>(url, { query: { poll: '1' } }).then(heard, () => null).finally(() => {
      if (!closed) timer = setTimeout(() => Date.now() < until ? poll(until) : open(), POLL_MS)
    })
  }
  open()
  return () => {
    closed = true
    clearTimeout(timer)
    source?.close()
  }
}
