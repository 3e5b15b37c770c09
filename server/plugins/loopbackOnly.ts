import { countDemoPersons } from '../services/countDemoPersons'
import { useDeps } from '../utils/deps'
import { isLoopback, listenHost } from '../utils/settings'

/** Demo accounts have a password that everybody knows, so a server that others could reach does not start while they exist. */
export default defineNitroPlugin((nitro) => {
  if (isLoopback(listenHost())) return
  const checked = countDemoPersons(useDeps()).then((count) => {
    if (count === 0) return
    console.error(`This database holds demo accounts, whose passwords are known: Lanthorn serves them on loopback only, not on ${listenHost()}.`)
    process.exit(1)
  }, (error: unknown) => {
    console.error(`Lanthorn does not serve ${listenHost()} before it knows that there are no demo accounts: ${error instanceof Error ? error.message : String(error)}`)
    process.exit(1)
  })
  // Nothing is answered before it is known.
  nitro.hooks.hook('request', async () => { await checked })
})
