import { createSocket } from 'node:dgram'
import { hostname } from 'node:os'
import type { Knex } from 'knex'
import { wakePorts } from '../queries/processes'

const LOOPBACK = '127.0.0.1'
const FRESH_MS = 3_000

/** Tells the other processes of this machine that something happened: jobs are queued, a fit is stored. A ring that is lost costs a moment: they look by themselves as well. */
export interface Bell { ring: () => void }

export const silentBell: Bell = { ring: () => undefined }

/** Rings every process of this machine, by datagram on loopback; where they listen stands in the database, read again every few seconds. */
export function loopbackBell(db: Knex, report: (error: unknown) => void): Bell {
  const socket = createSocket('udp4')
  socket.unref()
  socket.on('error', report)
  let known: { ports: number[], at: number } | null = null
  const ring = async (): Promise<void> => {
    if (known === null || Date.now() - known.at > FRESH_MS) known = { ports: await wakePorts(db, hostname()), at: Date.now() }
    for (const port of known.ports) socket.send('work', port, LOOPBACK)
  }
  return { ring: () => { ring().catch(report) } }
}

export interface Ear {
  /** Null until the socket is bound. */
  port: () => number | null
  /** Ends after the time, or as soon as somebody rings. */
  wait: (ms: number) => Promise<void>
  close: () => void
}

/** Hears nothing: waits run their time. */
export const deafEar: Ear = { port: () => null, wait: ms => new Promise((resolve) => { setTimeout(resolve, ms) }), close: () => undefined }

/** Listens for the bell on a free loopback port. What a datagram says does not matter: it only shortens a wait. */
export function openEar(report: (error: unknown) => void): Ear {
  const socket = createSocket('udp4')
  const waiting = new Set<() => void>()
  let port: number | null = null
  socket.unref()
  socket.on('error', report)
  socket.on('message', () => { for (const wake of [...waiting]) wake() })
  socket.bind(0, LOOPBACK, () => { port = socket.address().port })
  return {
    port: () => port,
    wait: ms => new Promise((resolve) => {
      const wake = (): void => {
        clearTimeout(timer)
        waiting.delete(wake)
        resolve()
      }
      const timer = setTimeout(wake, ms)
      waiting.add(wake)
    }),
    close: () => socket.close(),
  }
}
