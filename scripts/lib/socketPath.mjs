import { createHash } from 'node:crypto'
import { mkdirSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'

/** Longest path the system takes for a socket is about 107 bytes. */
const LONGEST = 100

/** The socket of a server folder: inside it where the path is short enough, else in a private folder beside the system's temporary files. */
export function socketFor(folder) {
  const inside = join(folder, 'mariadb.sock')
  if (Buffer.byteLength(inside) <= LONGEST) return inside
  const short = join(tmpdir(), `lanthorn-${createHash('sha256').update(folder).digest('hex').slice(0, 16)}`)
  mkdirSync(short, { recursive: true, mode: 0o700 })
  return join(short, 'mariadb.sock')
}
