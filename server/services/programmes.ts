import type { Doer, Command } from './unitOfWork'
import { AppError } from '../../shared/errors'
import type { InstallationProgramme } from '../../shared/schemas/installation'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { namedMemberships } from '../queries/memberships'
import { listPersons } from '../queries/persons'
import { insertProgramme, listProgrammes as readProgrammes } from '../queries/programmes'
import { unitOfWork } from './unitOfWork'

/** All programmes with how many people are in them and who leads; nothing of what they measured. */
export async function listProgrammes({ db }: Pick<Deps, 'db'>): Promise<{ programmes: InstallationProgramme[] }> {
  const names = new Map((await listPersons(db)).map(person => [person.id, person.name]))
  const memberships = (await namedMemberships(db)).filter(one => names.has(one.personId))
  const programmes = (await readProgrammes(db)).map((row) => {
    const inside = memberships.filter(one => one.programmeId === row.id)
    return {
      programmeId: row.id, code: row.code, name: row.name, description: row.description, createdAt: row.createdAt.toISOString(), members: inside.length,
      leads: inside.filter(one => one.roles.includes('lead')).map(one => names.get(one.personId)!),
    }
  })
  return { programmes }
}

export interface NewProgramme { actor: Doer, code: string, name: string, description: string, isDemo?: boolean, idempotency?: Command['idempotency'] }

/** Opens an empty programme; its first lead comes by invitation. @throws AppError('conflict') when the code is taken */
export async function createProgramme(deps: Deps, { actor, code, name, description, isDemo = false, idempotency }: NewProgramme): Promise<{ programmeId: string, code: string }> {
  try {
    return await unitOfWork(deps, { actor, name: 'createProgramme', programmeId: null, idempotency }, async ({ trx, id, now }) => {
      const programmeId = id()
      await insertProgramme(trx, { id: programmeId, code, name, description, isDemo, at: now })
      return { result: { programmeId, code }, subject: `programme ${code}`, payload: { code, name, description, programmeId } }
    })
  }
  catch (error) {
    if (isDuplicate(error, 'code')) throw new AppError('conflict', `There is a programme with the code ${code} already.`, { field: 'code', accepted: 'another code' })
    throw error
  }
}
