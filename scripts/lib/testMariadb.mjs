import { join } from 'node:path'
import { fromRoot } from './paths.mjs'
import { startMariadb } from './mariadb.mjs'

/** The server that tests run from the command line share; started on demand and left running. */
export const TEST_MARIADB_FOLDER = join(fromRoot('.data'), 'test-mariadb')

export function startTestMariadb({ folder = TEST_MARIADB_FOLDER, port = 33_406, say }) {
  return startMariadb({ folder, port, bufferPool: '256M', isDurable: false, say })
}
