import { join } from 'node:path'
import { Failure } from './failure.mjs'
import { releaseLock, takeLock } from './locks.mjs'
import { isPortFree } from './ports.mjs'
import { onStop } from './stopping.mjs'

/** Lets one command at a time use a data folder, and sees that the web port is free before anything slow begins. */
export async function claimFolderAndPort(settings) {
  const lock = join(settings.data, 'running.lock')
  const holder = takeLock(lock)
  if (holder !== null) throw new Failure(`Lanthorn already runs with the data folder ${settings.data} (process ${holder}). Stop it first, or set LANTHORN_DATA and PORT for a second one.`)
  onStop(() => releaseLock(lock))
  await requirePort(settings)
}

export async function requirePort({ host, port }) {
  if (!await isPortFree(port, host)) throw new Failure(`Port ${port} on ${host} is taken by another program. Choose one with PORT, for example: PORT=${port + 1} npm start`)
}
