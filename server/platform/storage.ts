import { createStorage, type Storage } from 'unstorage'
import fsDriver from 'unstorage/drivers/fs'
import memoryDriver from 'unstorage/drivers/memory'

/** Bytes by key, through the framework's storage layer: a folder by default, any unstorage driver (an S3-compatible bucket) by configuration. */
export interface FileStorage {
  put: (key: string, bytes: Uint8Array) => Promise<void>
  /** null when there is nothing under the key */
  get: (key: string) => Promise<Uint8Array | null>
  remove: (key: string) => Promise<void>
  keys: (prefix: string) => Promise<string[]>
}

export function folderStorage(folder: string): FileStorage {
  return fileStorage(createStorage({ driver: fsDriver({ base: folder }) }))
}

export function memoryStorage(): FileStorage {
  return fileStorage(createStorage({ driver: memoryDriver() }))
}

function fileStorage(storage: Storage): FileStorage {
  return {
    put: (key, bytes) => storage.setItemRaw(key, Buffer.from(bytes)),
    async get(key) {
      const value = await storage.getItemRaw<Uint8Array>(key)
      return value ? new Uint8Array(value) : null
    },
    remove: key => storage.removeItem(key),
    keys: prefix => storage.getKeys(prefix),
  }
}
