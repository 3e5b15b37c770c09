import { inject } from 'vitest'
import type { Knex } from 'knex'
import type { Actor, ProgrammeRole } from '../../shared/permissions'
import type { WorkerDeps } from '../../server/jobs/define'
import { fixedClock } from '../../server/platform/clock'
import { openDatabase } from '../../server/platform/database'
import { randomIds, toBinary } from '../../server/platform/ids'
import type { OutgoingMail } from '../../server/platform/mailer'
import { deafEar, silentBell } from '../../server/platform/bell'
import { scryptPasswords } from '../../server/platform/passwords'
import { threadReader } from '../../server/platform/tableReader'
import { memoryStorage } from '../../server/platform/storage'
import { membershipsOf, writeRoles } from '../../server/queries/people'
import { MEASUREMENTS } from '../../shared/measurements/index'

export const TEST_START = new Date('2026-03-02T09:00:00.000Z')

export interface TestDeps extends WorkerDeps {
  clock: ReturnType<typeof fixedClock>
  sent: OutgoingMail[]
  close: () => Promise<void>
}

/** Dependencies on the run's schema with the application's account: real MariaDB, memory for files, a clock that stands, mail that is kept. */
export function makeDeps(overrides: Partial<WorkerDeps> = {}): TestDeps {
  const db = openDatabase(inject('databaseUrl'), { maxConnections: 6 })
  const sent: OutgoingMail[] = []
  const kinds = overrides.kinds ?? MEASUREMENTS
  return {
    db, clock: fixedClock(TEST_START), ids: randomIds, storage: memoryStorage(), passwords: scryptPasswords(1024), bell: silentBell, ear: deafEar, tables: threadReader(), kinds, origin: 'http://127.0.0.1:3000',
    mailer: { send: async (mail) => { sent.push(mail); return `<${mail.id}@test>` }, close: () => undefined },
    analyse: async (input) => {
      const kind = kinds[input.kind]
      if (!kind) throw new Error(`No measurement kind is called ${input.kind}.`)
      return kind.analyse(input)
    },
    ...overrides,
    sent,
    close: () => db.destroy(),
  } as TestDeps
}

export interface TestProgramme { id: string, code: string, people: Record<ProgrammeRole, Actor> }

let counter = 0

/** A programme of its own for one test, with one person per role: rows of other tests are somebody else's. */
export async function makeProgramme(deps: TestDeps): Promise<TestProgramme> {
  const id = deps.ids.next()
  const code = `p${id.slice(-8)}${counter++}`
  await deps.db('programme').insert({ id: toBinary(id), code, name: `Programme ${code}`, description: '', created_at: deps.clock.now() })
  const people = {} as Record<ProgrammeRole, Actor>
  for (const role of ['chemist', 'physicist', 'lead', 'partner'] as const) people[role] = await makePerson(deps, { programmeId: id, roles: [role] })
  return { id, code, people }
}

/** @returns the person as an actor; without a programme, a person without memberships */
export async function makePerson(deps: TestDeps, { programmeId, roles = [], isAdministrator = false }: { programmeId?: string, roles?: ProgrammeRole[], isAdministrator?: boolean } = {}): Promise<Actor> {
  const personId = deps.ids.next()
  await insertPerson(deps.db, { personId, isAdministrator, at: deps.clock.now() })
  if (programmeId) await deps.db('membership').insert({ programme_id: toBinary(programmeId), person_id: toBinary(personId), roles: writeRoles(roles) })
  return { personId, sessionId: deps.ids.next(), name: `Person ${personId.slice(-6)}`, isAdministrator, memberships: await membershipsOf(deps.db, personId) }
}

async function insertPerson(db: Knex, { personId, isAdministrator, at }: { personId: string, isAdministrator: boolean, at: Date }): Promise<void> {
  await db('person').insert({
    id: toBinary(personId), email_ci: `${personId}@example.org`, name: `Person ${personId.slice(-6)}`, password_hash: 'none', is_administrator: isAdministrator,
    preferences: '{}', created_at: at,
  })
}
