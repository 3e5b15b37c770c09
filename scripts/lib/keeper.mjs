import { createWriteStream, mkdirSync } from 'node:fs'
import { dirname } from 'node:path'
import { startChild, stopChild } from './children.mjs'
import { hasBegunToStop } from './stopping.mjs'

const FIRST_PAUSE_MS = 500
const LONGEST_PAUSE_MS = 30_000
/** A process that ran this long before it ended starts again at the shortest pause. */
const STEADY_MS = 60_000

/**
 * Keeps one program running: when it ends without being asked, starts it again after a pause that doubles while it keeps failing.
 * What it writes goes to a log; lines on its error stream are shown as well.
 * @param part.name how to call it on screen
 * @param part.longestPause_ms where the doubling ends
 * @param part.command () => { args, env }, asked anew at each start
 * @returns stop(), the present pid, and whether the present process has ended
 */
export function keepRunning({ name, command, log, say, onEnd = () => {}, longestPause_ms = LONGEST_PAUSE_MS }) {
  mkdirSync(dirname(log), { recursive: true })
  const state = { child: null, pause_ms: FIRST_PAUSE_MS, isWanted: true, timer: null }

  function start() {
    const startedAt = Date.now()
    const output = createWriteStream(log, { flags: 'a', mode: 0o600 })
    const child = startChild({ ...command(), output: 'pipe' })
    state.child = child
    child.stdout.pipe(output, { end: false })
    child.stderr.pipe(output, { end: false })
    child.stderr.on('data', text => process.stderr.write(`${name}: ${text}`))
    child.once('close', (code, signal) => {
      output.end()
      if (!state.isWanted || hasBegunToStop()) return
      onEnd(code ?? signal)
      if (Date.now() - startedAt > STEADY_MS) state.pause_ms = FIRST_PAUSE_MS
      say(`The ${name} ended (${code ?? signal}); it starts again in ${state.pause_ms / 1000} s. Its log: ${log}`)
      state.timer = setTimeout(start, state.pause_ms)
      state.pause_ms = Math.min(2 * state.pause_ms, longestPause_ms)
    })
  }

  async function stop() {
    state.isWanted = false
    clearTimeout(state.timer)
    if (state.child !== null) await stopChild(state.child)
  }

  start()
  return { stop, get pid() { return state.child?.pid ?? null }, get hasEnded() { return state.child?.exitCode !== null || state.child?.signalCode !== null } }
}
