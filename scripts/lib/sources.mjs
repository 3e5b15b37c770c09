import { createHash } from 'node:crypto'
import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { root } from './paths.mjs'

/** What the build reads. Tests, documents and scripts are not part of it. */
const SOURCES = [
  'app.vue', 'error.vue', 'nuxt.config.ts', 'tailwind.config.ts', 'tsconfig.json', 'package.json', 'package-lock.json', 'assets', 'components', 'composables', 'layouts',
  'middleware', 'modules', 'pages', 'plugins', 'public', 'server', 'shared', 'stores', 'types', 'utils',
]

/** A hash over names and bytes of everything the build reads; a different one means the build is stale. */
export function hashSources() {
  const hash = createHash('sha256').update(process.version)
  for (const path of SOURCES.map(name => join(root, name)).filter(existsSync).flatMap(filesUnder)) {
    hash.update(`\0${path.slice(root.length)}\0`).update(readFileSync(path))
  }
  return hash.digest('hex')
}

function filesUnder(path) {
  if (statSync(path).isFile()) return [path]
  return readdirSync(path).sort().flatMap(name => filesUnder(join(path, name)))
}
