import { dirname, isAbsolute, join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'

export const root = resolve(dirname(fileURLToPath(import.meta.url)), '../..')

/** A path given by the environment, taken from the top of the checkout when it is relative. */
export function fromRoot(path) {
  return isAbsolute(path) ? path : join(root, path)
}

export const nodeModules = join(root, 'node_modules')
