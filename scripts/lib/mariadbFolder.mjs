import { existsSync, mkdirSync, readdirSync, renameSync, rmSync } from 'node:fs'
import { userInfo } from 'node:os'
import { join } from 'node:path'
import { requireProgram } from './packages.mjs'
import { capture } from './processes.mjs'

const SYSTEM_SCHEMAS = ['mysql', 'sys', 'performance_schema', 'test']

/**
 * Makes the data folder ready. The system tables are made under another name and moved into place when whole, so an interrupted first start leaves nothing
 * that looks finished. A folder that holds no system tables and no schema of ours is set aside, never deleted.
 */
export async function readyDataFolder({ folder, say }) {
  const data = join(folder, 'data')
  mkdirSync(join(folder, 'tmp'), { recursive: true, mode: 0o700 })
  if (isWhole(data)) return
  if (existsSync(data) && readdirSync(data).length > 0) {
    const aside = join(folder, `data.unfinished-${new Date().toISOString().replaceAll(/[:.]/g, '-')}`)
    renameSync(data, aside)
    say(`The database folder was half made: set aside as ${aside}, a new one is made.`)
  }
  await makeSystemTables({ folder, data })
}

/** A folder with a schema of ours is kept whatever it lacks: the server's own words are then the right answer. */
function isWhole(data) {
  if (!existsSync(data)) return false
  const schemas = readdirSync(data, { withFileTypes: true }).filter(entry => entry.isDirectory() && !SYSTEM_SCHEMAS.includes(entry.name) && !entry.name.startsWith('#'))
  if (schemas.length > 0) return true
  return existsSync(join(data, 'ibdata1')) && ['global_priv.frm', 'db.frm', 'proc.frm'].every(file => existsSync(join(data, 'mysql', file)))
}

async function makeSystemTables({ folder, data }) {
  const making = join(folder, 'data.making')
  rmSync(making, { recursive: true, force: true })
  mkdirSync(making, { mode: 0o700 })
  const installer = await requireProgram({ names: ['mariadb-install-db', 'mysql_install_db'], packageName: 'mariadb-server', say: () => {} })
  const account = userInfo().username
  await capture(installer, [
    '--no-defaults', `--datadir=${making}`, `--tmpdir=${join(folder, 'tmp')}`, '--skip-test-db', '--skip-name-resolve',
    '--auth-root-authentication-method=socket', `--auth-root-socket-user=${account}`, ...(process.getuid?.() === 0 ? ['--user=root'] : []),
    '--innodb-log-file-size=64M',
  ])
  rmSync(data, { recursive: true, force: true })
  renameSync(making, data)
}
