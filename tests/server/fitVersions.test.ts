import { afterAll, describe, expect, it, vi } from 'vitest'
import { FitPayload } from '../../server/jobs/fitRun'
import { toBinary } from '../../server/platform/ids'
import { claimJob, findJob } from '../../server/queries/jobs'
import { readEvidence } from '../../server/queries/evidence'
import { compareFits } from '../../server/services/compareFits'
import { analysisInput, loadSeries } from '../../server/services/fitInput'
import { followProgress, readProgress } from '../../server/services/followProgress'
import { repeatFit } from '../../server/services/repeatFit'
import { requestFit } from '../../server/services/requestFit'
import { showFit } from '../../server/services/showFit'
import { showSeries } from '../../server/services/showSeries'
import { storeFit } from '../../server/services/storeFit'
import { verifyAudit } from '../../server/services/verifyAudit'
import { canonicalJson } from '../../shared/science/canonical'
import { ExclusionRequest, FitRequest } from '../../shared/schemas/fit'
import { makeAccount, refusal, signedIn } from '../support/actors'
import { makeDeps, makeProgramme } from '../support/factory'
import { toyKind } from '../support/toyKind'
import { GLOW_DRAFT, glowTable, makeAgent, runJobs, upload } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())

/** A programme with one stored series, its first fit done or still in the queue. */
async function seriesWithFit({ fitted = true } = {}) {
  const programme = await makeProgramme(deps)
  const agent = await makeAgent(deps, programme)
  const { series } = await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
  const seriesId = series[0]!.id
  if (fitted) await runJobs(deps, programme)
  const { chemist, physicist } = programme.people
  const show = (versionNo: number) => showFit(deps, { programmeId: programme.id, scope: 'programme', seriesId, versionNo })
  const request = async (body: Partial<FitRequest>, run = true) => {
    await requestFit(deps, { actor: physicist, programmeId: programme.id, seriesId, request: FitRequest.parse(body) })
    if (run) await runJobs(deps, programme)
  }
  return { programme, agent, seriesId, chemist, physicist, show, request }
}

const BUBBLE = { tubeNo: 4, pointIndex: 2, reason: 'Air bubble seen in the last reading.' }

describe('versions of a fit', () => {
  it('leaves out with a reason, as a new version that names its parent; the old one stays as it is [product: check 4]', async () => {
    const { show, request, physicist } = await seriesWithFit()
    const first = await show(1)
    await request({ exclusions: [BUBBLE] })
    const second = await show(2)
    expect(second).toMatchObject({ parentVersion: 1, leftOut: 1, requestedBy: physicist.name, exclusions: [{ ...BUBBLE, personName: physicist.name, at: deps.clock.now().toISOString() }] })
    expect(second.tubes[3]!.points[2]!.excluded).toBe(BUBBLE.reason)
    expect(second.series!.headline.value).not.toBe(first.series!.headline.value)
    expect(await show(1)).toEqual(first)
  })

  it('keeps out what the parent left out, until it is put back by name', async () => {
    const { show, request } = await seriesWithFit()
    await request({ exclusions: [BUBBLE] })
    await request({ exclusions: [{ tubeNo: 3, pointIndex: 0, reason: 'Spilled while filling the tube.' }] })
    expect((await show(3)).exclusions.map(one => [one.tubeNo, one.pointIndex])).toEqual([[3, 0], [4, 2]])
    await request({ putBack: [{ tubeNo: 3, pointIndex: 0 }] })
    const last = await show(4)
    expect(last.exclusions).toHaveLength(1)
    expect(last.resultHash).toBe((await show(2)).resultHash)
  })

  it('stores a refused fit too, with its reason, and no evidence', async () => {
    const { programme, show, request } = await seriesWithFit()
    const out = (tubeNo: number) => ({ tubeNo, pointIndex: null, reason: 'This tube was filled twice.' })
    await request({ exclusions: [out(2), out(3)] })
    expect(await show(2)).toMatchObject({ outcome: 'refused', refusal: { reason: 'tooFewTubes', accepted: 'three tubes' }, series: null, evidence: [] })
    expect((await readEvidence(deps.db, programme.id, 'programme')).map(item => item.origin.versionNo)).toEqual([1])
  })

  it.each([
    ['a tube that is not there', { exclusions: [{ ...BUBBLE, tubeNo: 9 }] }, 'exclusions.0'],
    ['a point that is not there', { exclusions: [{ ...BUBBLE, pointIndex: 3 }] }, 'exclusions.0'],
    ['the same point twice', { exclusions: [BUBBLE, BUBBLE] }, 'exclusions.1'],
    ['to put back what is not out', { putBack: [{ tubeNo: 1, pointIndex: null }] }, 'putBack.0'],
    ['an unknown model', { modelId: 'toy.magic' }, 'modelId'],
    ['an option that is not there', { options: { magic: 1 } }, 'options.magic'],
    ['a choice that an option does not have', { options: { note: 'loud' } }, 'options.note'],
    ['an unknown parent', { parentVersion: 7 }, 'parentVersion'],
  ])('refuses %s, and says what it would accept', async (_, body, field) => {
    const { request, programme } = await seriesWithFit()
    const error = await request(body).catch(refused => refused as { code: string, details: object })
    expect(error).toMatchObject({ code: 'invalidInput', details: { field, accepted: expect.stringMatching(/.+/) } })
    expect((await readProgress(deps, programme.id)).jobs.filter(job => job.state === 'queued')).toEqual([])
  })

  it('asks for ten characters of reason', () => {
    expect(ExclusionRequest.safeParse({ ...BUBBLE, reason: 'bubble   ' }).success).toBe(false)
    expect(ExclusionRequest.safeParse({ ...BUBBLE, reason: 'air bubble' }).success).toBe(true)
  })

  it('gives each of two fits that end at the same moment a number of its own', async () => {
    const { programme, request, seriesId } = await seriesWithFit()
    await request({}, false)
    await request({ modelId: 'toy.drift' }, false)
    const claims = [(await claimJob(deps.db, 60, programme.id))!, (await claimJob(deps.db, 60, programme.id))!]
    const fits = await Promise.all(claims.map(job => ready(job, programme.id)))
    const stored = await Promise.all(fits.map(fit => storeFit(deps, fit)))
    expect(stored.map(one => one.versionNo).sort()).toEqual([2, 3])
    const { versions } = await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId })
    expect(versions.map(one => one.versionNo)).toEqual([3, 2, 1])
    expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: true })
  })

  it('is never stored twice: a worker whose lease was taken over stores nothing [architecture: fencing]', async () => {
    const { programme, seriesId } = await seriesWithFit({ fitted: false })
    const slow = (await claimJob(deps.db, 60, programme.id))!
    await deps.db('job').where({ id: toBinary(slow.id) }).update({ lease_until: deps.db.raw('DATE_SUB(NOW(6), INTERVAL 1 SECOND)') })
    const quick = (await claimJob(deps.db, 60, programme.id))!
    expect(quick).toMatchObject({ id: slow.id, fence: slow.fence + 1 })
    await expect(storeFit(deps, await ready(slow, programme.id))).rejects.toThrow('Somebody else holds this job')
    await storeFit(deps, await ready(quick, programme.id))
    await expect(storeFit(deps, await ready(slow, programme.id))).rejects.toThrow()
    expect((await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId })).versions).toHaveLength(1)
    expect(await findJob(deps.db, slow.id)).toMatchObject({ state: 'done' })
  })

  async function ready(job: NonNullable<Awaited<ReturnType<typeof claimJob>>>, programmeId: string) {
    const payload = FitPayload.parse(job.payload)
    const loaded = await loadSeries(deps, programmeId, payload.seriesId)
    const input = analysisInput(loaded, payload)
    return { job, programmeId, payload, loaded, input, outcome: toyKind.analyse(input) }
  }
})

describe('repeating', () => {
  it('finds the same text byte for byte, also of a version with points left out [architecture: exactness]', async () => {
    const { programme, seriesId, chemist, request } = await seriesWithFit()
    await request({ exclusions: [BUBBLE], options: { note: 'kept' } })
    const repeated = await repeatFit(deps, { actor: chemist, programmeId: programme.id, seriesId, versionNo: 2 })
    expect(repeated).toMatchObject({ same: true, versionNo: 2, differenceCount: 0, relativeDifference: 0, sameEngine: true, modelVersion: { stored: 2, now: 2 } })
    expect(repeated.repeatedHash).toBe(repeated.storedHash)
  })

  it('says what differs and by how much when the model gives other numbers by now', async () => {
    const { programme, seriesId, chemist } = await seriesWithFit()
    const changed = { ...toyKind, models: [{ id: 'toy.mean', version: 3, title: 'Mean' }], analyse: (input: Parameters<typeof toyKind.analyse>[0]) => {
      const outcome = toyKind.analyse(input)
      if (outcome.ok) outcome.series.headline.value *= 1 + 1e-9
      return outcome
    } }
    const repeated = await repeatFit({ ...deps, kinds: { 'toy.glow': changed } }, { actor: chemist, programmeId: programme.id, seriesId, versionNo: 1 })
    expect(repeated).toMatchObject({ same: false, differences: [{ path: '$.series.headline.value' }], modelVersion: { stored: 2, now: 3 } })
    expect(repeated.relativeDifference).toBeGreaterThan(0.99e-9)
    expect(repeated.relativeDifference).toBeLessThan(1.01e-9)
  })

  it('computes nothing from a series that does not match the hash it was stored with', async () => {
    const { programme, seriesId } = await seriesWithFit()
    const loaded = await loadSeries(deps, programme.id, seriesId)
    expect(loaded.tubes).toHaveLength(4)
    const other = await seriesWithFit()
    const text = canonicalJson({ columns: ['dwell_s', 'glow_au'], rows: [[1, 99]], conc_mM: 9, concSe_mM: null })
    await deps.db('tube').insert({ id: toBinary(deps.ids.next()), programme_id: toBinary(other.programme.id), series_id: toBinary(other.seriesId), tube_no: 99, label: 'slipped in', role: 'sample', conc_mM: 9, place: '', n_points: 1, points: text, points_hash: Buffer.alloc(32) })
    await expect(loadSeries(deps, other.programme.id, other.seriesId)).rejects.toThrow('does not match its hash')
  })
})

describe('comparing', () => {
  it('weighs nested models on the same points by AICc and F [closed form: F = (ΔRSS/Δν)/(RSS/ν)]', async () => {
    const { programme, seriesId, request } = await seriesWithFit()
    await request({ modelId: 'toy.drift' })
    const compared = await compareFits(deps, { programmeId: programme.id, seriesId, versions: [1, 2] })
    expect(compared).toMatchObject({ samePoints: true, fTest: { df1: 4, df2: 4, simpler: 'a' } })
    const f = (compared.a.rss! - compared.b.rss!) / 4 / (compared.b.rss! / 4)
    expect(compared.fTest!.f).toBeCloseTo(f, 12)
    // With 4 and 4 degrees of freedom P(F > f) = 1 − x²(3 − 2x), x = f/(1 + f): the incomplete beta function I_x(2, 2).
    const x = f / (1 + f)
    expect(compared.fTest!.p).toBeCloseTo(1 - x * x * (3 - 2 * x), 10)
    expect(compared.aiccDifference).toBeCloseTo(compared.b.aicc! - compared.a.aicc!, 12)
  })

  it('does not judge between versions on different points, and says so', async () => {
    const { programme, seriesId, request } = await seriesWithFit()
    await request({ exclusions: [BUBBLE] })
    const compared = await compareFits(deps, { programmeId: programme.id, seriesId, versions: [1, 2] })
    expect(compared).toMatchObject({ samePoints: false, aiccDifference: null, fTest: null, note: expect.stringContaining('different points') })
    expect(compared.shiftInSe).toBeCloseTo((compared.b.headline!.value - compared.a.headline!.value) / compared.a.headline!.se!, 12)
  })
})

describe('progress', () => {
  it('tells the programme\'s own jobs in words, and ends for whoever is removed', async () => {
    const [one, other] = [await seriesWithFit({ fitted: false }), await seriesWithFit({ fitted: false })]
    expect((await readProgress(deps, one.programme.id)).jobs).toMatchObject([{ seriesId: one.seriesId, state: 'queued', fraction: null, error: null }])
    await runJobs(deps, one.programme)
    expect((await readProgress(deps, one.programme.id)).jobs).toMatchObject([{ state: 'done', fraction: 1 }])
    expect((await readProgress(deps, other.programme.id)).jobs).toMatchObject([{ seriesId: other.seriesId, state: 'queued' }])
    const stranger = await signedIn(deps, (await makeAccount(deps)).email)
    expect(await refusal(followProgress(deps, { sessionId: stranger.sessionId, programmeId: one.programme.id }))).toMatchObject({ code: 'notSignedIn' })
  })

  it('shows a fit that cannot be computed as parked, with why', async () => {
    const broken = { ...deps, kinds: { 'toy.glow': { ...toyKind, evidence: () => { throw new Error('The lamp is out.') } } } }
    const { programme } = await seriesWithFit({ fitted: false })
    const said = vi.spyOn(console, 'error').mockImplementation(() => undefined)
    for (let i = 0; i < 5; i++) {
      await deps.db('job').where({ programme_id: toBinary(programme.id) }).whereNot('state', 'parked').update({ run_after: deps.db.raw('NOW(6)') })
      await runJobs(broken, programme)
    }
    expect((await readProgress(deps, programme.id)).jobs).toMatchObject([{ state: 'parked', error: 'The lamp is out.', attempts: 4, maxAttempts: 4 }])
    expect(said).toHaveBeenCalledTimes(4)
    said.mockRestore()
  })
})
