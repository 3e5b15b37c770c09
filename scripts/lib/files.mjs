import { readFileSync } from 'node:fs'

/** The text of a file, or null where there is none. */
export function readIfThere(path) {
  try {
    return readFileSync(path, 'utf8')
  }
  catch (error) {
    if (error.code === 'ENOENT') return null
    throw error
  }
}
