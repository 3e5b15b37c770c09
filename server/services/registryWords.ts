import { AppError } from '../../shared/errors'
import { isDuplicate } from '../platform/database'

/** Someone else's agent and one that does not exist answer in the same words. */
export const noSuchAgent = (): AppError => new AppError('notFound', 'There is no such agent in this programme.')
export const noSuchBatch = (): AppError => new AppError('notFound', 'There is no such batch of this agent.')
export const noSuchRecord = (): AppError => new AppError('notFound', 'There is no such record in this programme.')

interface Taken { what: string, code: string, field: string, by: { personName: string, at: Date } | null }

/** A code that is taken names who registered it and when. */
export function takenBy({ what, code, field, by }: Taken): AppError {
  const whom = by ? `${by.personName} registered it` : 'it was registered'
  return new AppError('conflict', `${what} ${code} is taken in this programme: ${whom} before.`, {
    field, accepted: 'another code, or the one that is registered', data: by ? { personName: by.personName, at: by.at.toISOString() } : {},
  })
}

/** Somebody added the next version between reading and writing. */
export function changedMeanwhile(what: string, by: { personName: string, at: Date } | null): AppError {
  return new AppError('conflict', `${what} was changed meanwhile${by ? ` by ${by.personName}` : ''}.`, {
    accepted: 'a change to its newest version', data: by ? { personName: by.personName, at: by.at.toISOString() } : {},
  })
}

/** Runs an insert; a duplicate on the key becomes the refusal that `refuse` words inside the same transaction. */
export async function orTaken(key: string, insert: () => Promise<void>, refuse: () => Promise<AppError>): Promise<void> {
  try {
    await insert()
  }
  catch (error) {
    if (!isDuplicate(error, key)) throw error
    throw await refuse()
  }
}
