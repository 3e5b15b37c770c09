import { randomBytes } from 'node:crypto'
import { chmodSync, mkdirSync, renameSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { Failure } from './failure.mjs'
import { readIfThere } from './files.mjs'

/** How many characters each secret has when we make it, and what the environment may bring instead. */
const SECRETS = {
  NUXT_SESSION_PASSWORD: { length: 48, isGood: text => text.length >= 32, rule: 'needs at least 32 characters' },
  NUXT_CSURF_ENCRYPT_SECRET: { length: 32, isGood: text => text.length === 32, rule: 'needs exactly 32 characters' },
  DATABASE_OWNER_PASSWORD: { length: 32, isGood: text => text.length >= 16, rule: 'needs at least 16 characters' },
  DATABASE_APP_PASSWORD: { length: 32, isGood: text => text.length >= 16, rule: 'needs at least 16 characters' },
}

/** The installation's secrets: from the environment, else from the data folder, made there once with mode 600. */
export function ensureSecrets(data, env = process.env) {
  const path = join(data, 'secrets')
  const text = readIfThere(path)
  const kept = text === null ? {} : parse(text)
  const missing = Object.keys(SECRETS).filter(name => kept[name] === undefined)
  if (missing.length > 0) {
    for (const name of missing) kept[name] = makeSecret(SECRETS[name].length)
    mkdirSync(data, { recursive: true, mode: 0o700 })
    write(path, kept)
  }
  else {
    chmodSync(path, 0o600)
  }
  /** @type {Record<string, string>} */
  const secrets = {}
  for (const [name, { isGood, rule }] of Object.entries(SECRETS)) {
    secrets[name] = env[name] || kept[name]
    if (!isGood(secrets[name])) throw new Failure(`${name} ${rule}${env[name] ? '' : ` (it is kept in ${path})`}.`)
  }
  return secrets
}

function makeSecret(length) {
  return randomBytes(length).toString('base64url').slice(0, length)
}

function parse(text) {
  return Object.fromEntries(text.split('\n').filter(line => line.includes('=')).map((line) => {
    const sign = line.indexOf('=')
    return [line.slice(0, sign), line.slice(sign + 1)]
  }))
}

/** Whole or not at all: a start cut short leaves no half file behind. */
function write(path, values) {
  const beside = `${path}.new`
  writeFileSync(beside, Object.entries(values).map(([name, value]) => `${name}=${value}\n`).join(''), { mode: 0o600 })
  chmodSync(beside, 0o600)
  renameSync(beside, path)
}
