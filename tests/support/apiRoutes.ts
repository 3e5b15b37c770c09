import { readdirSync, readFileSync } from 'node:fs'
import { join, relative, sep } from 'node:path'
import { fileURLToPath } from 'node:url'
import type { Permission } from '../../shared/permissions'

export interface ApiRoute { file: string, method: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE', permission: Permission | 'public', isProgramme: boolean, path: (programmeCode: string) => string }

const root = fileURLToPath(new URL('../../server/api', import.meta.url))
/** Parameters that name a thing: well-formed, and of nothing that exists. */
const MADE_UP: Readonly<Record<string, string>> = { token: 'A'.repeat(43), kind: 'fit', version: '1', tube: '1', code: 'TS-222222', name: 'none' }
const NO_ROW = '01990000-0000-7000-8000-00000000dead'

/** Every route of the product as its file declares it, the catch-all left out. */
export function apiRoutes(): ApiRoute[] {
  return readdirSync(root, { recursive: true, withFileTypes: true }).filter(one => one.isFile())
    .map(one => relative(root, join(one.parentPath, one.name)).split(sep).join('/')).filter(file => file !== '[...path].ts').sort().map(toRoute)
}

function toRoute(file: string): ApiRoute {
  const text = readFileSync(join(root, file), 'utf8')
  const permission = /^ {2}permission: '([^']+)'/m.exec(text)?.[1] as Permission | 'public' | undefined
  const method = /\.(get|post|put|patch|delete)\.ts$/.exec(file)?.[1]?.toUpperCase() as ApiRoute['method'] | undefined
  if (!permission || !method) throw new Error(`${file} says no permission or no method.`)
  const parts = file.replace(/\.\w+\.ts$/, '').split('/').filter(part => part !== 'index')
  const path = (programmeCode: string) => `/api/${parts.map(part => fill(part, programmeCode)).join('/')}`
  return { file, method, permission, isProgramme: parts[0] === 'programmes' && parts[1] === '[programme]', path }
}

function fill(part: string, programmeCode: string): string {
  const name = /^\[(\w+)\]$/.exec(part)?.[1]
  if (!name) return part
  return name === 'programme' ? programmeCode : MADE_UP[name] ?? NO_ROW
}
