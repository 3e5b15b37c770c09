import type { Actor } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { ProgrammeSettings } from '../../shared/schemas/people'
import type { Deps } from '../platform/deps'
import { findProgramme, updateProgramme } from '../queries/programmes'
import { unitOfWork, type Command } from './unitOfWork'

export async function showSettings({ db }: Pick<Deps, 'db'>, { programmeId }: { programmeId: string }): Promise<ProgrammeSettings> {
  const row = await findProgramme(db, programmeId)
  if (!row) throw new AppError('notFound', 'There is no such programme, or it is not open to you.')
  return { code: row.code, name: row.name, description: row.description, partnerSeesRawFiles: row.partnerSeesRawFiles }
}

export interface SettingsChange { actor: Actor, programmeId: string, change: Omit<ProgrammeSettings, 'code'>, idempotency: Command['idempotency'] }

/** Changes name, description and what partners may see of raw files. The code stays: links carry it. */
export async function changeSettings(deps: Deps, { actor, programmeId, change, idempotency }: SettingsChange): Promise<ProgrammeSettings> {
  return unitOfWork(deps, { actor, name: 'changeSettings', programmeId, idempotency }, async ({ trx }) => {
    const before = await showSettings({ db: trx }, { programmeId })
    await updateProgramme(trx, programmeId, change)
    return { result: { ...change, code: before.code }, subject: `programme ${before.code}`, payload: { from: before, to: change } }
  })
}
