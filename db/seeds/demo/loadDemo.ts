import type { WorkerDeps } from '../../../server/jobs/define'
import { JOBS } from '../../../server/jobs/index'
import { drainJobs } from '../../../server/jobs/runJobs'
import type { fixedClock } from '../../../server/platform/clock'
import { addInstrument } from '../../../server/queries/presets'
import { countPersons, markDemoPersons } from '../../../server/queries/persons'
import { enterRecord } from '../../../server/services/enterRecord'
import { nameReferenceTube } from '../../../server/services/instruments'
import { registerAgent } from '../../../server/services/registerAgent'
import { registerBatch } from '../../../server/services/registerBatch'
import { saveTubeSheet } from '../../../server/services/tubeSheets'
import { savePreset } from '../../../server/services/savePreset'
import { SourceInput } from '../../../shared/schemas/source'
import { DEMO_AGENTS } from './agents'
import { agentBody, batchPayload } from './bodies'
import { decideOn, saveStartingProfile } from './decisions'
import { type Institute, makeInstitute } from './institute'
import { DEMO_RECORDS, type DemoRecord } from './records'
import { enterReadinessLists } from './readiness'
import { DEMO_FILES } from './series'
import { measure } from './measure'
import { signAs } from './sign'
import { DEMO_TITRATIONS } from './titrations'

export interface DemoDeps extends WorkerDeps { clock: ReturnType<typeof fixedClock> }

/** Reads one raw file of the demonstration. */
export type ReadDemoFile = (fileName: string) => Promise<Uint8Array>

const MINUTE_MS = 60_000
const at = (day: string, hour: number): Date => new Date(`${day}T${String(hour).padStart(2, '0')}:00:00.000Z`)

/**
 * Loads the demonstration into an empty database, the way people would have: registered, uploaded, fitted, checked, signed, decided, through the same
 * services and on invented days.
 * @throws Error when anybody has an account already
 */
export async function loadDemo(deps: DemoDeps, readFile: ReadDemoFile): Promise<Institute> {
  if (await countPersons(deps.db) > 0) throw new Error('The demonstration is loaded into an empty database only; this one has accounts.')
  deps.clock.set(at('2026-09-01', 8))
  const institute = await makeInstitute(deps)
  await registerAll(deps, institute)
  await enterAll(deps, institute)
  deps.clock.set(at('2026-09-07', 9))
  const profile = await saveStartingProfile(deps, institute)
  await savePreset(deps, {
    actor: institute.people.idris, programmeId: institute.programmeId,
    preset: { name: 'Bay 3, inversion recovery in plasma', kind: 'relax.t1.ir', conditions: { instrument: 'Bay 3', b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'plasma', timing: 'longTr', signalForm: 'signed', concBasis: 'icp', concScaleError_frac: 0.015 } },
  })
  await nameReference(deps, institute)
  await enterReadinessLists(deps, institute)
  for (const file of [...DEMO_FILES, ...DEMO_TITRATIONS].sort((a, b) => (a.day < b.day ? -1 : 1))) {
    deps.clock.set(at(file.day, 10))
    await measure(deps, institute, file, await readFile(file.fileName))
    await decideOn(deps, institute, { profileVersionId: profile.id, after: file.fileName })
  }
  await drainJobs(deps, JOBS, institute.programmeId)
  await markDemoPersons(deps.db, Object.values(institute.people).map(one => one.personId))
  return institute
}

/** The scanner of bay 3 is watched by a sealed tube; one tube sheet waits to be filled in. */
async function nameReference(deps: DemoDeps, { programmeId, people }: Institute): Promise<void> {
  const id = deps.ids.next()
  await addInstrument(deps.db, { id, programmeId, name: 'Bay 3', b0_T: 3, at: deps.clock.now() })
  const request = { label: 'REF', contents: 'Sealed tube, 0.26 mM MnCl_2 in water', since: '2026-09-01', reason: 'Made for this bay in August; T1 held for a month.', expectedSeq: 0 }
  await nameReferenceTube(deps, { actor: people.oren, programmeId, id, request })
  const tube = (tubeNo: number, conc_mM: number) => ({ tubeNo, label: `t${tubeNo}`, role: conc_mM === 0 ? 'blank' as const : 'sample' as const, agent: conc_mM === 0 ? null : 'SK-08', lot: conc_mM === 0 ? null : 'A1', conc_mM, concSe_mM: conc_mM === 0 ? null : Number((0.006 * conc_mM).toPrecision(2)), stock_uL: 100 * conc_mM, diluent_uL: 1000 - 100 * conc_mM })
  await saveTubeSheet(deps, {
    actor: people.idris, programmeId,
    sheet: { kind: 'relax.t2.echo', title: 'SK-08 A1, T2 in plasma', conditions: { b0_T: 3, temperature_K: 310.15, medium: 'plasma', concBasis: 'icp', concScaleError_frac: 0.015 }, tubes: [0, 0.25, 0.5, 1, 1.5, 2].map((conc, i) => tube(i + 1, conc)), values: Array.from({ length: 24 }, (_, i) => Number((0.008 * (i + 1)).toPrecision(3))), columns: 3 },
  })
}

async function registerAll(deps: DemoDeps, { programmeId, people }: Institute): Promise<void> {
  for (const agent of DEMO_AGENTS) {
    deps.clock.advance(20 * MINUTE_MS)
    const [first, ...more] = agent.batches
    const made = await registerAgent(deps, { actor: people.idris, programmeId, body: agentBody(agent, first!) })
    if (first!.freeMetal) await signAs(deps, { programmeId, sender: people.idris, signer: people.oren, kind: 'batchVersion', id: made.batchVersionId })
    for (const batch of more) {
      const { id } = await registerBatch(deps, { actor: people.idris, programmeId, code: agent.code, lot: batch.lot, payload: batchPayload(batch) })
      if (batch.freeMetal) await signAs(deps, { programmeId, sender: people.idris, signer: people.oren, kind: 'batchVersion', id })
    }
  }
}

async function enterAll(deps: DemoDeps, institute: Institute): Promise<void> {
  deps.clock.set(at('2026-09-03', 9))
  for (const record of DEMO_RECORDS) {
    deps.clock.advance(15 * MINUTE_MS)
    await enterOne(deps, institute, record)
  }
}

async function enterOne(deps: DemoDeps, { programmeId, people }: Institute, record: DemoRecord): Promise<void> {
  const actor = people[record.by]
  const source = SourceInput.parse({ citation: record.citation, origin: record.origin })
  const { id } = await enterRecord(deps, { actor, programmeId, body: { kind: record.kind, agent: record.agent, lot: null, entry: record.entry, source } })
  if (record.fate === 'draft') return
  await signAs(deps, { programmeId, sender: actor, signer: record.fate === 'signed' ? people.oren : null, kind: 'record', id })
}
