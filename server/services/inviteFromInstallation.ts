import type { z } from 'zod'
import type { Actor } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { InvitationRow, InviteFromInstallation } from '../../shared/schemas/people'
import type { Deps } from '../platform/deps'
import { findProgrammeByCode } from '../queries/programmes'
import { invite } from './invite'
import type { Command } from './unitOfWork'

export interface InstallationInvite { actor: Actor, wish: z.output<typeof InviteFromInstallation>, idempotency: Command['idempotency'] }

/** The administrator's invitations: the lead of a programme, or another administrator. No other roles, for those are the lead's to give. */
export async function inviteFromInstallation(deps: Deps, { actor, wish, idempotency }: InstallationInvite): Promise<InvitationRow> {
  if (wish.as === 'administrator') return invite(deps, { actor, email: wish.email, programmeId: null, roles: [], idempotency })
  const programme = await findProgrammeByCode(deps.db, wish.programmeCode)
  if (!programme) throw new AppError('notFound', 'There is no such programme.', { field: 'programmeCode' })
  return invite(deps, { actor, email: wish.email, programmeId: programme.id, roles: ['lead'], idempotency })
}
