import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Knex } from 'knex'
import { makeDeps } from '../support/factory'
import { openAsOwner, tableNames } from '../support/ownerDatabase'

const deps = makeDeps()
const owner = openAsOwner()
let tables: string[] = []
beforeAll(async () => { tables = await tableNames(owner) })
afterAll(async () => {
  await deps.close()
  await owner.destroy()
})

/** Tables whose rows may change, with what may be done to them; every other table only grows. A new entry here needs a reason that stands review. */
const MUTABLE: Readonly<Record<string, readonly ('UPDATE' | 'DELETE')[]>> = {
  // who is here now; what changed is in membership_event and the trail
  person: ['UPDATE'], session: ['UPDATE', 'DELETE'], one_time_token: ['UPDATE'], programme: ['UPDATE'], membership: ['UPDATE', 'DELETE'], invitation: ['UPDATE'],
  // machinery
  job: ['UPDATE', 'DELETE'], idempotency: ['DELETE'], audit_head: ['UPDATE'], process_beat: ['UPDATE', 'DELETE'],
  // a convenience that fills forms; what was measured carries its own conditions
  preset: ['UPDATE', 'DELETE'],
  // an upload before it is confirmed
  upload_staged: ['UPDATE', 'DELETE'],
  // where a subject stands now; check_event says how it came there
  check_current: ['UPDATE'],
}
const DENIED = 1142

/** What the database answers to a statement that would touch no row; null = it would have been done. */
async function refusalOf(db: Knex, sql: string): Promise<number | null> {
  try {
    await db.raw(sql)
    return null
  }
  catch (error) {
    return (error as { errno: number }).errno
  }
}

async function firstColumn(table: string): Promise<string> {
  const [[row]] = await owner.raw(
    'SELECT column_name AS name FROM information_schema.columns WHERE table_schema = DATABASE() AND table_name = ? AND generation_expression IS NULL ORDER BY ordinal_position LIMIT 1', [table],
  ) as [[{ name: string }]]
  return row.name
}

describe('the application\'s account', () => {
  it('may read and append everywhere', async () => {
    expect(tables.length).toBeGreaterThan(30)
    for (const table of tables) expect(await refusalOf(deps.db, `SELECT 1 FROM \`${table}\` WHERE 1 = 0`), table).toBeNull()
  })

  it('is refused an UPDATE of every table but the listed ones [architecture: append-only by grants]', async () => {
    for (const table of tables) {
      const column = await firstColumn(table)
      const refused = await refusalOf(deps.db, `UPDATE \`${table}\` SET \`${column}\` = \`${column}\` WHERE 1 = 0`)
      expect([table, refused]).toEqual([table, MUTABLE[table]?.includes('UPDATE') ? null : DENIED])
    }
  })

  it('is refused a DELETE from every table but the listed ones', async () => {
    for (const table of tables) {
      const refused = await refusalOf(deps.db, `DELETE FROM \`${table}\` WHERE 1 = 0`)
      expect([table, refused]).toEqual([table, MUTABLE[table]?.includes('DELETE') ? null : DENIED])
    }
  })

  it('is refused REPLACE and ON DUPLICATE KEY UPDATE on append-only tables, which rewrite rows by another name', async () => {
    for (const table of ['audit', 'evidence', 'check_event', 'mail', 'membership_event'].filter(one => tables.includes(one))) {
      const column = await firstColumn(table)
      expect(await refusalOf(deps.db, `REPLACE INTO \`${table}\` SELECT * FROM \`${table}\` WHERE 1 = 0`), table).toBe(DENIED)
      expect(await refusalOf(deps.db, `INSERT INTO \`${table}\` SELECT * FROM \`${table}\` t WHERE 1 = 0 ON DUPLICATE KEY UPDATE \`${column}\` = VALUES(\`${column}\`)`), table).toBe(DENIED)
    }
  })

  it('is refused to change, empty or drop a table, or to make one', async () => {
    for (const sql of ['TRUNCATE TABLE audit', 'ALTER TABLE audit ADD COLUMN x INT', 'DROP TABLE audit', 'CREATE TABLE x (id INT)', 'CREATE TRIGGER x BEFORE INSERT ON audit FOR EACH ROW SET @a = 1']) {
      expect([sql, await refusalOf(deps.db, sql)]).toEqual([sql, DENIED])
    }
  })

  it('holds exactly the grants of the list, on this schema and no other', async () => {
    const [rows] = await deps.db.raw('SHOW GRANTS FOR CURRENT_USER()') as [Record<string, string>[]]
    const granted: Record<string, string[]> = {}
    for (const row of rows) {
      const text = Object.values(row)[0]!
      const match = /^GRANT (.+) ON `(.+?)`\.(?:`(.+?)`|\*) TO /.exec(text)
      if (!match) {
        expect(text).toMatch(/^GRANT USAGE ON \*\.\* TO /)
        continue
      }
      expect(match[2]!.replaceAll('\\_', '_')).toBe((deps.db.client as { database: () => string }).database())
      if (match[3]) granted[match[3]] = match[1]!.split(', ').sort()
      else expect(match[1]!.split(', ').sort()).toEqual(['INSERT', 'SELECT'])
    }
    const expected = Object.fromEntries(Object.entries(MUTABLE).map(([table, rights]) => [table, [...rights].sort()]))
    expect(granted).toEqual(expected)
  })
})
