import { EvidenceDraft } from '../../shared/evidence/types'
import type { AnalysisInput, AnalysisOutcome } from '../../shared/measurements/types'
import { canonicalJson } from '../../shared/science/canonical'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { hex, sealed } from '../platform/hashes'
import { insertEvidence } from '../queries/evidence'
import { insertExclusion, insertFit, insertFitInputs, nextVersionNo, type StoredExclusion } from '../queries/fits'
import { insertReading } from '../queries/instruments'
import { finishJob, type JobRow } from '../queries/jobs'
import { engineOf } from './engine'
import { type LoadedSeries, orderedExclusions, seedOf } from './fitInput'
import { unitOfWork, type Work } from './unitOfWork'

export interface FitToStore {
  job: Pick<JobRow, 'id' | 'fence'>
  programmeId: string
  payload: {
    requestedBy: string
    modelId: string
    options: AnalysisInput['options']
    exclusions: readonly (Omit<StoredExclusion, 'at'> & { at: string })[]
    parentId: string | null
  }
  loaded: LoadedSeries
  input: AnalysisInput
  outcome: AnalysisOutcome
}

const TRIES = 5

/**
 * Stores a finished fit, refused ones too: version, inputs, what was left out, evidence and the end of its job, in one transaction. Of two workers that
 * hold the same job only the one with the newest fence can; the other's transaction is undone.
 */
export async function storeFit(deps: Deps, fit: FitToStore): Promise<{ fitId: string, versionNo: number }> {
  for (let attempt = 1; ; attempt++) {
    try {
      const done = await unitOfWork(deps, { actor: null, name: 'storeFit', programmeId: fit.programmeId }, async (work) => {
        const stored = await write(deps, work, fit)
        if (!await finishJob(work.trx, fit.job, work.now)) throw new Error('Somebody else holds this job by now; this fit is not stored.')
        return { result: stored, subject: `fit ${stored.fitId}`, payload: { seriesId: fit.loaded.series.id, versionNo: stored.versionNo, outcome: stored.outcome, resultHash: stored.resultHash, requestedBy: fit.payload.requestedBy } }
      })
      // Whoever watches hears of it at once.
      deps.bell.ring()
      return done
    }
    catch (error) {
      // Two fits of one series finished at once: the later one takes the next number.
      if (attempt >= TRIES || !isDuplicate(error, 'version')) throw error
    }
  }
}

async function write(deps: Deps, work: Work, { job, programmeId, payload, loaded, input, outcome }: FitToStore) {
  const { series, tubes, kind } = loaded
  const fitId = work.id()
  const versionNo = await nextVersionNo(work.trx, series.id)
  const result = sealed(outcome)
  await insertFit(work.trx, {
    id: fitId, programmeId, seriesId: series.id, versionNo, parentId: payload.parentId, jobId: job.id, modelId: payload.modelId,
    modelVersion: kind.models.find(model => model.id === payload.modelId)?.version ?? 0, options: canonicalJson(payload.options),
    exclusionsHash: sealed(orderedExclusions(payload.exclusions)).hash, seed: seedOf(series), inputHash: series.inputHash, engine: canonicalJson(engineOf()),
    outcome: outcome.ok ? 'ok' : 'refused', result: result.text, resultHash: result.hash, requestedBy: payload.requestedBy, at: work.now,
  })
  await insertFitInputs(work.trx, { programmeId, fitId, tubes })
  for (const one of payload.exclusions) await insertExclusion(work.trx, { ...one, at: new Date(one.at), id: work.id(), programmeId, fitId })
  await writeReadings(work, { programmeId, fitId, loaded, outcome })
  if (outcome.ok) {
    for (const draft of kind.evidence(outcome, input)) {
      await insertEvidence(work.trx, { id: work.id(), programmeId, complexId: series.complexId, batchId: series.batchId, origin: { kind: 'fit', id: fitId }, draft: ofBatch(draft, series.batchId), at: work.now })
    }
  }
  return { fitId, versionNo, outcome: outcome.ok ? 'ok' : 'refused', resultHash: hex(result.hash) }
}

/** What this fit reads of the instrument's reference tube, for its control chart. A tube that was left out says nothing of the session. */
async function writeReadings(work: Work, { programmeId, fitId, loaded: { series }, outcome }: Pick<FitToStore, 'programmeId' | 'loaded' | 'outcome'> & { fitId: string }): Promise<void> {
  const { instrument, temperature_K, date } = series.conditions
  for (const tube of outcome.tubes) {
    if (tube.role !== 'reference' || tube.excluded !== null || tube.headline === null || typeof instrument !== 'string') continue
    await insertReading(work.trx, {
      id: work.id(), programmeId, seriesId: series.id, fitId, tubeNo: tube.tubeNo, label: tube.label, instrument, kind: series.kind, quantity: tube.headline.name, value: tube.headline.value, se: tube.headline.se,
      temperature_K: typeof temperature_K === 'number' ? temperature_K : null, measuredOn: typeof date === 'string' && /^\d{4}-\d{2}-\d{2}$/.test(date) ? date : null, at: work.now,
    })
  }
}

/** A kind names a shared error by what the form says of the stock; two batches that say the same are still two stocks. */
function ofBatch(draft: EvidenceDraft, batchId: string): EvidenceDraft {
  const { covarianceGroup, ...rest } = EvidenceDraft.parse(draft)
  return { ...rest, covarianceGroup: covarianceGroup && { ...covarianceGroup, id: `batch:${batchId}/${covarianceGroup.id}` } }
}
