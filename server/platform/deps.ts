import type { Knex } from 'knex'
import type { MeasurementKind } from '../../shared/measurements/types'
import type { Bell, Ear } from './bell'
import type { Clock } from './clock'
import type { Ids } from './ids'
import type { Passwords } from './passwords'
import type { FileStorage } from './storage'
import type { TableReader } from './tableReader'

/** What services reach the outside through. Passed in, never imported, so that tests and the demo loader choose clock, ids and storage. */
export interface Deps {
  db: Knex
  clock: Clock
  ids: Ids
  storage: FileStorage
  passwords: Passwords
  /** Rung after a command has put jobs into the queue. */
  bell: Bell
  /** Waits for the bell, for whoever would ask the database again and again. */
  ear: Ear
  tables: TableReader
  /** Registered measurement kinds; tests add a toy kind. */
  kinds: Readonly<Record<string, MeasurementKind>>
  /** Public address of the web process, for links in mail. */
  origin: string
}
