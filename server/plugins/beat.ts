import { hostname } from 'node:os'
import { beat } from '../services/beat'
import { useDeps } from '../utils/deps'

const BEAT_ms = 5_000

/** Says every few seconds that this web process is alive, for the System page. */
export default defineNitroPlugin((nitro) => {
  const deps = useDeps()
  const one = { name: `web ${hostname()} ${process.pid}`, startedAt: deps.clock.now() }
  // A beat that fails is only late: the database may be restarting, and requests say so on their own.
  const run = () => beat(deps, one).catch((error: unknown) => console.error(JSON.stringify({ process: one.name, error: String(error) })))
  void run()
  const timer = setInterval(run, BEAT_ms)
  timer.unref()
  nitro.hooks.hookOnce('close', () => clearInterval(timer))
})
