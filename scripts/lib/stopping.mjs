import { Failure } from './failure.mjs'

const steps = []
let isStopping = false

/** Registers what to undo when this command ends; the last one registered is undone first. */
export function onStop(step) {
  steps.push(step)
}

/** Undoes every step, each even when another fails. Returns false when it was already under way. */
export async function stopAll() {
  if (isStopping) return false
  isStopping = true
  for (const step of steps.toReversed()) {
    try {
      await step()
    }
    catch (error) {
      console.error(error)
      process.exitCode = 1
    }
  }
  return true
}

export function hasBegunToStop() {
  return isStopping
}

/** Ctrl-C, a closed terminal and a polite kill all stop what this command started, and nothing else. */
export function stopOnSignals({ say, exitCode = 0 }) {
  const stop = async () => {
    if (isStopping) return
    say('Stopping ...')
    await stopAll()
    process.exit(exitCode)
  }
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, stop)
  if (process.env.npm_lifecycle_event !== undefined) stopWithParent(stop)
}

/** npm dies of a signal without passing it on; whoever stopped npm start means all of it. */
function stopWithParent(stop) {
  const parent = process.ppid
  setInterval(() => {
    if (process.ppid !== parent) void stop()
  }, 500).unref()
}

/**
 * Runs a command that stays up until it is stopped. When it cannot come up, what it had started is stopped and the reason is said:
 * one line for what the person can put right, else the whole error.
 */
export async function runUntilStopped(main) {
  try {
    await main()
  }
  catch (error) {
    // An error met while stopping is the stop itself, seen from the step it cut short.
    if (isStopping) return
    console.error(error instanceof Failure ? error.message : error)
    await stopAll()
    process.exit(1)
  }
}
