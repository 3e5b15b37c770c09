import { Failure, runMain } from './lib/failure.mjs'
import { runningMariadb, stopMariadb } from './lib/mariadb.mjs'
import { say } from './lib/say.mjs'
import { startTestMariadb, TEST_MARIADB_FOLDER } from './lib/testMariadb.mjs'

const verbs = {
  async start() {
    const server = await startTestMariadb({ say })
    say(`The test database ${server.wasStarted ? 'is up' : 'was up already'} on 127.0.0.1:${server.port} (process ${server.pid}).`)
  },
  async stop() {
    say(await stopMariadb(TEST_MARIADB_FOLDER) === 'gone' ? 'The test database was not running.' : 'The test database has stopped.')
  },
  status() {
    const server = runningMariadb(TEST_MARIADB_FOLDER)
    say(server === null ? 'The test database is not running.' : `The test database is up on 127.0.0.1:${server.port} (process ${server.pid}).`)
  },
}

await runMain(async () => {
  const verb = verbs[process.argv[2] ?? 'start']
  if (verb === undefined) throw new Failure('Use: node scripts/testDatabase.mjs start | stop | status')
  await verb()
})
