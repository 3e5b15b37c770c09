import { createServer } from 'node:net'

/** Whether a TCP port can be bound on this address now. */
export function isPortFree(port, host = '127.0.0.1') {
  return new Promise((done, fail) => {
    const probe = createServer()
    probe.once('error', error => error.code === 'EADDRINUSE' || error.code === 'EACCES' ? done(false) : fail(error))
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => done(true)))
  })
}

/** The first free port at or above `first`. */
export async function nextFreePort(first, host = '127.0.0.1') {
  for (let port = first; port < first + 200 && port < 65_536; port += 1) {
    if (await isPortFree(port, host)) return port
  }
  throw new Error(`No free port between ${first} and ${first + 199}.`)
}

/** A port the system picks; free at the moment of asking. */
export function anyFreePort(host = '127.0.0.1') {
  return new Promise((done, fail) => {
    const probe = createServer()
    probe.once('error', fail)
    probe.listen({ port: 0, host }, () => {
      const { port } = probe.address()
      probe.close(() => done(port))
    })
  })
}
