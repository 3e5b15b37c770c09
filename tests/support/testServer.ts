import { startTestMariadb } from '../../scripts/lib/testMariadb.mjs'

/** The private test MariaDB: the one of this run of npm test when it made one, else the shared one that stays up between runs. */
export async function testServer() {
  const folder = process.env.LANTHORN_TEST_MARIADB
  return await startTestMariadb({ ...(folder === undefined ? {} : { folder }), say: (line: string) => process.stderr.write(`${line}\n`) })
}
