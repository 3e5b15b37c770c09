import type { NamedQuantity } from '../../evidence/quantity'
import { arex, type WithError } from '../../science/exchange/asymmetry'
import { compareCounts } from '../../science/exchange/lorentzianCounts'
import type { LorentzianFit, PoolStart } from '../../science/exchange/lorentzianFit'
import { lorentzianAt } from '../../science/exchange/lorentzianModel'
import type { ExpectedPool } from '../../science/exchange/spectrumFlags'
import type { AnalysedPoint, AnalysisInput, Flag, SeriesTube, TubeResult } from '../types'
import type { ProcessedScan, ScanOutcome } from './processScan'
import { poolOf, type Sample } from './samples'
import { readingsOf } from './scans'

const quantity = (name: string, label: string, unit: string, { value, se }: WithError): NamedQuantity => ({ name, label, unit, value, kind: '=', se, interval: null, evidenceId: null })

/** A spectrum with its pools. */
interface PooledScan { readonly scan: ProcessedScan, readonly fit: LorentzianFit | null, readonly preferred: number | null }

/** Each tube with its spectra as Z over the offset from water, the pools that were fitted, and what was read at the pool. */
export function tubeResults(input: AnalysisInput, samples: readonly Sample[], poolCount: number): TubeResult[] {
  const outcomes = samples.flatMap(one => one.outcomes)
  return input.tubes.map(tube => tubeResult(tube, input, { outcomes: outcomes.filter(one => one.scan.tube.tubeNo === tube.tubeNo), r1w: samples.find(one => one.outcomes.some(other => other.scan.tube.tubeNo === tube.tubeNo))?.r1w ?? null }, poolCount))
}

function tubeResult(tube: SeriesTube, input: AnalysisInput, { outcomes, r1w }: { outcomes: readonly ScanOutcome[], r1w: WithError | null }, poolCount: number): TubeResult {
  const pool = poolOf(input.conditions)
  const scans = outcomes.filter(one => one.ok)
  const pooled = scans.map(scan => fitPools(scan, pool, poolCount))
  const excluded = input.exclusions.find(one => one.tubeNo === tube.tubeNo && one.pointIndex === null)?.reason ?? null
  const base = { tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded, points: pointsOf(tube, input, pooled), secondOpinion: null, passed: [] }
  const refused = outcomes.find(one => !one.ok)
  const strongest = scans.reduce<ProcessedScan | null>((a, b) => a === null || b.scan.b1_uT > a.scan.b1_uT ? b : a, null)
  if (strongest === null) {
    const refusal = refused && !refused.ok ? { reason: refused.reason, message: refused.message, accepted: refused.accepted } : noSpectrum(tube, excluded)
    return { ...base, headline: null, parameters: [], refusal, curve: [], flags: [], statistics: null }
  }
  const headline = strongest.mirror ? quantity('mtrAsym', 'MTR_{asym}', '', strongest.mirror.mtrAsym) : strongest.lab ? quantity('zPool', 'Z at the pool', '', strongest.lab) : quantity('waterShift_ppm', 'Water shift', 'ppm', { value: strongest.shift.shift_ppm, se: strongest.shift.se_ppm })
  return {
    ...base, headline, refusal: null, parameters: pooled.flatMap(one => scanQuantities(one, r1w, pooled.length > 1)), curve: pooled.flatMap(curveOf),
    flags: flagsOf(tube.tubeNo, scans, pooled), statistics: statisticsOf(pooled), intervalMethod: 'errors from the noise of S0, the drift-corrected S0 and the water shift',
  }
}

function noSpectrum(tube: SeriesTube, excluded: string | null) {
  if (tube.role !== 'sample') return { reason: 'blank', message: 'A tube without agent has no pool to read.', accepted: 'the role sample, if there is agent in it' }
  if (excluded !== null) return { reason: 'leftOut', message: 'The tube is left out.', accepted: 'the tube taken back' }
  return { reason: 'noSpectrum', message: 'The tube has no spectrum besides S0 and a water scan.', accepted: 'readings at offsets around the pool, with B1 and saturation time' }
}

/** Water and the pool of the agent, then more where the residuals ask for them. */
function fitPools(scan: ProcessedScan, pool: ExpectedPool, count: number): PooledScan {
  const { offset_ppm: x, z } = scan.centred
  const least = Math.min(...x.slice(1).map((at, i) => at - x[i]!))
  const depth = Math.max(...z) - Math.min(...z)
  const near = x.filter((_, i) => z[i]! < Math.max(...z) - depth / 2)
  const waterWidth = Math.max(2 * least, Math.min(near.at(-1)! - near[0]!, Math.abs(pool.offset_ppm)))
  const known: PoolStart[] = [
    { name: 'water', offset_ppm: 0, offsetRange_ppm: [-Math.max(0.5, least), Math.max(0.5, least)], width_ppm: waterWidth, widthRange_ppm: [least / 2, 4 * Math.abs(pool.offset_ppm) + 10], depthRange: [0, 1.2] },
    { name: 'pool', offset_ppm: pool.offset_ppm, offsetRange_ppm: [pool.offset_ppm - pool.width_ppm, pool.offset_ppm + pool.width_ppm], width_ppm: pool.width_ppm, widthRange_ppm: [Math.min(least / 2, pool.width_ppm / 4), 6 * pool.width_ppm], depthRange: [0, 1.2] },
  ]
  const { fits, preferred } = compareCounts(scan.centred, known, [2, Math.max(3, count)], { baseline: 'fitted' })
  const outcome = fits.find(one => one.count === count)?.outcome ?? null
  return { scan, fit: outcome?.ok ? outcome : null, preferred }
}

function pointsOf(tube: SeriesTube, { conditions, exclusions }: AnalysisInput, pooled: readonly PooledScan[]): AnalysedPoint[] {
  const shown = new Map<number, { x: number, y: number, fitted: number | null, residual: number | null }>()
  for (const { scan, fit } of pooled) {
    scan.normalised.members.forEach((members, i) => members.forEach((member) => {
      const fitted = fit?.fitted[i] ?? null
      const y = scan.centred.z[i]!
      shown.set(scan.scan.readings[member]!.index, { x: scan.centred.offset_ppm[i]!, y, fitted, residual: fitted === null ? null : y - fitted })
    }))
  }
  const reasons = readingsOf(tube, conditions, exclusions)
  const scale = pooled[0] ? meanS0(pooled[0].scan) : null
  // a reading that was left out stands where it would: offset as measured, over the S0 of the tube
  return reasons.flatMap(({ index, offset_ppm, signal_au, excluded, isS0 }): AnalysedPoint[] => {
    const found = shown.get(index)
    if (found) return [{ index, ...found, studentised: null, excluded: null }]
    return excluded === null || isS0 || scale === null ? [] : [{ index, x: offset_ppm, y: signal_au / scale, fitted: null, residual: null, studentised: null, excluded }]
  })
}

const meanS0 = ({ scan }: ProcessedScan): number => scan.raw.s0.reduce((sum, one) => sum + one.signal_au, 0) / scan.raw.s0.length

function scanQuantities({ scan, fit }: PooledScan, r1w: WithError | null, isOneOfMany: boolean): NamedQuantity[] {
  const { scan: { nominalB1_uT, tsat_s }, shift, mirror, area, lab } = scan
  const tail = isOneOfMany ? `, ${nominalB1_uT} µT, ${tsat_s} s` : ''
  const key = isOneOfMany ? `@${nominalB1_uT}uT@${tsat_s}s` : ''
  const of = (name: string, label: string, unit: string, value: WithError) => quantity(`${name}${key}`, `${label}${tail}`, unit, value)
  const rex = mirror?.mtrRex ?? null
  const poolFit = fit?.pools[1] ?? null
  return [
    ...(shift.method === 'none' ? [] : [of('waterShift_ppm', 'Water shift', 'ppm', { value: shift.shift_ppm, se: shift.se_ppm })]),
    ...(mirror ? [of('mtrAsym', 'MTR_{asym}', '', mirror.mtrAsym), of('ptr', 'PTR', '', mirror.ptr), of('mtrRex', 'MTR_{Rex}', '', mirror.mtrRex)] : lab ? [of('zPool', 'Z at the pool', '', lab)] : []),
    ...(rex && r1w ? [of('arex_per_s', 'AREX', 's^-1', arex(rex, { rate1_per_s: r1w.value, se: r1w.se }))] : []),
    ...(area ? [of('asymArea_ppm', 'Area of MTR_{asym}', 'ppm', area)] : []),
    ...(poolFit ? [of('poolOffset_ppm', 'Pool, offset', 'ppm', poolFit.offset_ppm), of('poolWidth_ppm', 'Pool, width', 'ppm', poolFit.width_ppm), of('poolDepth', 'Pool, depth', '', poolFit.depth)] : []),
  ]
}

/** The sum of the pools along the spectrum: at every offset and twice between, so that a narrow dip keeps its shape. */
function curveOf({ scan, fit }: PooledScan): { x: number, y: number }[] {
  if (fit === null) return []
  const x = scan.centred.offset_ppm
  const pools = fit.pools.map(one => ({ depth: one.depth.value, width_ppm: one.width_ppm.value, offset_ppm: one.offset_ppm.value }))
  const places = x.flatMap((at, i) => i + 1 < x.length ? [at, at + (x[i + 1]! - at) / 3, at + (2 * (x[i + 1]! - at)) / 3] : [at])
  return places.map(at => ({ x: Number(at.toPrecision(6)), y: Number(((fit.baseline?.value ?? 1) - pools.reduce((sum, one) => sum + lorentzianAt(at, one), 0)).toPrecision(6)) }))
}

/** Each flag once in a tube, with the spectrum where it was seen first. */
function flagsOf(tubeNo: number, scans: readonly ProcessedScan[], pooled: readonly PooledScan[]): Flag[] {
  const flags = scans.flatMap(({ flags: own, scan }) => own.map(flag => ({ ...flag, tubeNo, sentence: scans.length > 1 ? `${scan.nominalB1_uT} µT, ${scan.tsat_s} s: ${flag.sentence}` : flag.sentence })))
  const warned = pooled.find(one => one.fit?.conditionWarning)
  const all = warned ? [...flags, { id: 'poolsNotDetermined', title: 'Pools hardly determined', sentence: warned.fit!.conditionWarning!, tubeNo }] : flags
  return all.filter((flag, i) => all.findIndex(other => other.id === flag.id) === i)
}

function statisticsOf(pooled: readonly PooledScan[]): TubeResult['statistics'] {
  const fits = pooled.flatMap(one => one.fit ? [one.fit] : [])
  if (fits.length === 0) return null
  const one = fits.length === 1 ? fits[0]! : null
  const preferred = pooled.flatMap(each => each.preferred ?? [])
  return {
    rss: fits.reduce((sum, fit) => sum + fit.rss, 0), dof: fits.reduce((sum, fit) => sum + fit.dof, 0), reducedChi2: one?.reducedChi2 ?? null, aicc: one?.aicc ?? null, r2: null, condition: one?.condition ?? null,
    evaluations: fits.reduce((sum, fit) => sum + fit.evaluations, 0), stop: `${fits[0]!.pools.length} Lorentzian pools in each spectrum${preferred.length > 0 ? `; AICc prefers ${[...new Set(preferred)].sort().join(' or ')}` : ''}`,
    sigma: fits.every(fit => fit.reducedChi2 !== null) ? 'from the repeats of S0 or as given' : 'from the scatter about each fit',
  }
}
