import type { CheckSubjectKind } from '../../../shared/checks/transitions'
import type { Actor } from '../../../shared/permissions'
import { returnEvidence } from '../../../server/services/returnEvidence'
import { signEvidence } from '../../../server/services/signEvidence'
import { submitForCheck } from '../../../server/services/submitForCheck'
import type { DemoDeps } from './loadDemo'

interface Signing { programmeId: string, sender: Actor, signer: Actor | null, kind: CheckSubjectKind, id: string, second?: Actor }
const HOUR_MS = 3_600_000

/** Sends a subject for checking and, where a signer is named, signs it some hours later; a second person signs where two signatures are asked for. */
export async function signAs(deps: DemoDeps, { programmeId, sender, signer, kind, id, second }: Signing): Promise<void> {
  const where = { programmeId, kind, id, comment: '' }
  await submitForCheck(deps, { ...where, actor: sender, expectedSeq: 0 })
  if (!signer) return
  deps.clock.advance(HOUR_MS / 4)
  const { state } = await signEvidence(deps, { ...where, actor: signer, expectedSeq: 1 })
  if (state === 'firstSigned' && second) await signEvidence(deps, { ...where, actor: second, expectedSeq: 2 })
}

/** Sends a subject for checking and returns it with a comment. */
export async function returnAs(deps: DemoDeps, { programmeId, sender, signer, kind, id, comment }: Omit<Signing, 'second'> & { signer: Actor, comment: string }): Promise<void> {
  await submitForCheck(deps, { programmeId, kind, id, comment: '', actor: sender, expectedSeq: 0 })
  deps.clock.advance(HOUR_MS)
  await returnEvidence(deps, { programmeId, kind, id, comment, actor: signer, expectedSeq: 1 })
}
