import { JOBS } from '../../../server/jobs/index'
import { drainJobs } from '../../../server/jobs/runJobs'
import { recordDecision } from '../../../server/services/recordDecision'
import { saveProfile } from '../../../server/services/saveProfile'
import { RecordDecisionInput } from '../../../shared/schemas/decision'
import type { ProfileVersionDto } from '../../../shared/schemas/profile'
import { SaveProfileInput } from '../../../shared/schemas/profile'
import { DEFAULT_PROFILE } from '../../../shared/science/placement/profile'
import type { Institute } from './institute'
import type { DemoDeps } from './loadDemo'

/** Decisions of the demonstration, each taken after the file named was signed. */
const DECISIONS = [
  { after: 'SK-06_A1_bay3.csv', agent: 'SK-06', outcome: 'hold', reasons: 'The best relaxivity so far, and 0.4 % of its metal is free. Wait for a batch that passes the free-metal test before anything else is spent on it.' },
  { after: 'SK-07_A1_A2_one_blank.csv', agent: 'SK-07', outcome: 'advance', reasons: 'Two waters and two batches that agree: it needs the least agent for the contrast asked for, and its loss stays within the limit.' },
  { after: 'SK-10_A1.csv', agent: 'SK-10', outcome: 'hold', reasons: 'One batch is not enough to trust the slope. Measure the second batch, then look again.' },
  { after: 'SK-10_B1.csv', agent: 'SK-02', outcome: 'stop', reasons: 'Lets go as quickly as its open-chain parent and holds less at equilibrium; nothing speaks for it against the rings.' },
] as const

/** The first profile: the starting values, which are screening assumptions and say so. */
export function saveStartingProfile(deps: DemoDeps, { programmeId, people }: Institute): Promise<ProfileVersionDto> {
  const body = SaveProfileInput.parse({ payload: DEFAULT_PROFILE, basedOn: null, note: 'Starting values, unchanged.' })
  return saveProfile(deps, { actor: people.mara, programmeId, body })
}

export async function decideOn(deps: DemoDeps, { programmeId, people }: Institute, { profileVersionId, after }: { profileVersionId: string, after: string }): Promise<void> {
  for (const { agent, outcome, reasons } of DECISIONS.filter(one => one.after === after)) {
    deps.clock.advance(2 * 3_600_000)
    await recordDecision(deps, { actor: people.mara, programmeId, body: RecordDecisionInput.parse({ agent, outcome, reasons, profileVersionId, supersedes: null }) })
    await drainJobs(deps, JOBS, programmeId)
  }
}
