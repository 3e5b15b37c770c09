import { JOBS } from '../../../server/jobs/index'
import { drainJobs } from '../../../server/jobs/runJobs'
import { fitVersions, type FitVersionRow } from '../../../server/queries/fits'
import { confirmUpload } from '../../../server/services/confirmUpload'
import { previewUpload } from '../../../server/services/previewUpload'
import { requestFit } from '../../../server/services/requestFit'
import { stageUpload } from '../../../server/services/stageUpload'
import { FitRequest } from '../../../shared/schemas/fit'
import { UploadDraft } from '../../../shared/measurements/draft'
import { seriesTubes } from '../../../server/queries/series'
import type { Institute } from './institute'
import type { DemoDeps } from './loadDemo'
import type { DemoUpload } from './series'
import { returnAs, signAs } from './sign'

/** One raw file all the way: staged, previewed, stored, fitted, and what became of it. */
export async function measure(deps: DemoDeps, institute: Institute, file: DemoUpload, bytes: Uint8Array): Promise<void> {
  const { programmeId, people } = institute
  const actor = people[file.by]
  const staged = await stageUpload(deps, { actor, programmeId, files: [{ fileName: file.fileName, bytes }] })
  const [only] = file.parts
  const draft = UploadDraft.parse({ kind: file.kind, ...(file.parts.length === 1 ? { complexCode: only!.agent, lot: only!.lot } : {}) })
  const preview = await previewUpload(deps, { actor, programmeId, id: staged.id, draft })
  if (!preview.canStore) throw new Error(`${file.fileName}: ${preview.problems.map(one => one.message).join(' ')}`)
  const confirmed = await confirmUpload(deps, { actor, programmeId, id: staged.id, draft })
  await drainJobs(deps, JOBS, programmeId)
  for (const series of confirmed.series) await follow(deps, institute, { file, seriesId: series.id })
  await drainJobs(deps, JOBS, programmeId)
}

interface Followed { file: DemoUpload, seriesId: string }

async function follow(deps: DemoDeps, institute: Institute, { file, seriesId }: Followed): Promise<void> {
  const { programmeId, people } = institute
  const sender = people[file.by]
  const fit = await newestFit(deps, programmeId, seriesId)
  const check = { programmeId, sender, kind: 'fit' as const, id: fit.id }
  if (file.fate === 'signed') await signAs(deps, { ...check, signer: people.oren, second: people.sunniva })
  if (file.fate === 'waiting') await signAs(deps, { ...check, signer: null })
  if (file.fate === 'returned') {
    await returnAs(deps, { ...check, signer: people.oren, comment: 'Four tubes up to 0.25 mM do not carry a slope to 3 %. Please measure up to 2 mM, as for the others.' })
  }
  if (file.fate === 'leaveOutAndSign') await leaveOutAndSign(deps, institute, { file, seriesId })
}

/** The physicist leaves the spoiled tube out with a reason; the new version goes through the check like any other. */
async function leaveOutAndSign(deps: DemoDeps, { programmeId, people }: Institute, { file, seriesId }: Followed): Promise<void> {
  const spoiled = file.parts[0]!.spoiled!
  const tube = (await seriesTubes(deps.db, programmeId, seriesId)).find(one => one.conc_mM === spoiled.conc_mM)
  if (!tube) throw new Error(`${file.fileName} has no tube of ${spoiled.conc_mM} mM.`)
  const request = FitRequest.parse({ exclusions: [{ tubeNo: tube.tubeNo, pointIndex: null, reason: 'Pipetting log: this tube was refilled from the stock by mistake; it lies far off the line.' }] })
  await requestFit(deps, { actor: people.oren, programmeId, seriesId, request })
  await drainJobs(deps, JOBS, programmeId)
  const fit = await newestFit(deps, programmeId, seriesId)
  await signAs(deps, { programmeId, sender: people[file.by], signer: people.oren, second: people.sunniva, kind: 'fit', id: fit.id })
}

async function newestFit(deps: DemoDeps, programmeId: string, seriesId: string): Promise<FitVersionRow> {
  const [fit] = await fitVersions(deps.db, programmeId, seriesId)
  if (!fit) throw new Error(`Series ${seriesId} has no fit: its job did not run.`)
  return fit
}
