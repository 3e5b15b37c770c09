import { z } from 'zod'
import { storeFit } from '../services/storeFit'
import { analysisInput, loadSeries } from '../services/fitInput'
import { defineJob } from './define'

export const FitPayload = z.object({
  seriesId: z.uuid(),
  requestedBy: z.uuid(),
  modelId: z.string(),
  options: z.record(z.string(), z.union([z.number(), z.string(), z.boolean()])),
  exclusions: z.array(z.object({ tubeNo: z.number(), pointIndex: z.number().nullable(), reason: z.string(), personId: z.uuid(), at: z.iso.datetime() })),
  parentId: z.uuid().nullable(),
})
export type FitPayload = z.output<typeof FitPayload>

/** Computes one fit in the pool and stores it as the series' next version, together with its evidence and the end of this job. */
export const fitRun = defineJob({
  kind: 'fit.run',
  payload: FitPayload,
  limitSeconds: 600,
  async run(deps, { job, payload, report, signal }) {
    if (!job.programmeId) throw new Error('A fit belongs to a programme.')
    const loaded = await loadSeries(deps, job.programmeId, payload.seriesId)
    const input = analysisInput(loaded, payload)
    report(0.1)
    const outcome = await deps.analyse(input, signal)
    signal.throwIfAborted()
    report(0.9)
    await storeFit(deps, { job, programmeId: job.programmeId, payload, loaded, input, outcome })
  },
})
