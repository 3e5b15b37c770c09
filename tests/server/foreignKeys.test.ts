import { afterAll, describe, expect, it } from 'vitest'
import { toBinary } from '../../server/platform/ids'
import { makeDeps, makeProgramme } from '../support/factory'
import { openAsOwner } from '../support/ownerDatabase'

const deps = makeDeps()
const owner = openAsOwner()
afterAll(async () => {
  await deps.close()
  await owner.destroy()
})

interface Rule { name: string, table: string, parent: string, onDelete: string, onUpdate: string }
interface Part { name: string, table: string, column: string, parentColumn: string }

async function rules(): Promise<Rule[]> {
  const [rows] = await owner.raw(`SELECT constraint_name AS name, table_name AS 'table', referenced_table_name AS parent, delete_rule AS onDelete, update_rule AS onUpdate
    FROM information_schema.referential_constraints WHERE constraint_schema = DATABASE()`) as [Rule[]]
  return rows
}
async function parts(): Promise<Part[]> {
  const [rows] = await owner.raw(`SELECT constraint_name AS name, table_name AS 'table', column_name AS 'column', referenced_column_name AS parentColumn
    FROM information_schema.key_column_usage WHERE constraint_schema = DATABASE() AND referenced_table_name IS NOT NULL ORDER BY ordinal_position`) as [Part[]]
  return rows
}

describe('foreign keys', () => {
  it('all restrict: a cascade would delete append-only rows past missing grants [architecture: measured]', async () => {
    const all = await rules()
    expect(all.length).toBeGreaterThan(40)
    for (const rule of all) expect([rule.table, rule.name, rule.onDelete, rule.onUpdate]).toEqual([rule.table, rule.name, 'RESTRICT', 'RESTRICT'])
  })

  it('between rows of programmes carry the programme: no row points across', async () => {
    const [columns] = await owner.raw('SELECT table_name AS name FROM information_schema.columns WHERE table_schema = DATABASE() AND column_name = \'programme_id\'') as [{ name: string }[]]
    const owned = new Set(columns.map(row => row.name))
    const keys = await parts()
    const crossing = (await rules()).filter(rule => owned.has(rule.table) && owned.has(rule.parent))
    expect(crossing.length).toBeGreaterThan(20)
    for (const rule of crossing) {
      const pairs = keys.filter(part => part.table === rule.table && part.name === rule.name).map(part => [part.column, part.parentColumn])
      expect([rule.table, rule.parent, pairs]).toEqual([rule.table, rule.parent, expect.arrayContaining([['programme_id', 'programme_id']])])
    }
  })

  it('refuse a child in another programme than its parent', async () => {
    const [mine, other] = [await makeProgramme(deps), await makeProgramme(deps)]
    const ligand = deps.ids.next()
    const row = (programmeId: string) => ({ id: toBinary(deps.ids.next()), programme_id: toBinary(programmeId), ligand_id: toBinary(ligand) })
    await deps.db('ligand').insert({ id: toBinary(ligand), programme_id: toBinary(mine.id), code: 'L1', created_by: toBinary(mine.people.chemist.personId), created_at: deps.clock.now() })
    const complex = (programmeId: string) => deps.db('complex').insert({ ...row(programmeId), code: 'C1', created_by: toBinary(mine.people.chemist.personId), created_at: deps.clock.now() })
    await expect(complex(other.id)).rejects.toMatchObject({ errno: 1452 })
    await expect(complex(mine.id)).resolves.toBeDefined()
  })
})
