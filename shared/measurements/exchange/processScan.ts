import { asymmetryArea, readMirrored, type CentredSpectrum, type MirrorReading, type WithError } from '../../science/exchange/asymmetry'
import { normaliseSpectrum, type NormalisedSpectrum } from '../../science/exchange/normalise'
import { createPchip } from '../../science/exchange/pchip'
import type { ExchangeRefusal } from '../../science/exchange/refusal'
import { spectrumFlags, type ExchangeFlag, type ExpectedPool } from '../../science/exchange/spectrumFlags'
import { noShift, shiftBySymmetry, shiftByWaterDip, type WaterShift } from '../../science/exchange/waterShift'
import { inverseVarianceMean } from '../../science/statistics'
import type { Scan } from './scans'

/** A spectrum normalised, centred on water and read at the pool. */
export interface ProcessedScan {
  readonly ok: true
  readonly scan: Scan
  readonly normalised: NormalisedSpectrum
  readonly shift: WaterShift
  readonly centred: CentredSpectrum
  /** Null where one side of the pool is not in the data. */
  readonly mirror: MirrorReading | null
  /** Z at the pool, where at least that side is there. */
  readonly lab: WithError | null
  /** Over the pool's width. */
  readonly area: WithError | null
  readonly flags: readonly ExchangeFlag[]
}

export type ScanOutcome = ProcessedScan | (ExchangeRefusal & { readonly scan: Scan })
export type ShiftChoice = 'auto' | 'wassr' | 'waterDip' | 'none'

/**
 * Processes the spectra of one sample. The water scan of the same tube serves its spectra; where the tube has none, that of another tube of the sample does.
 * @param choice 'auto': a water scan where there is one, else the dip of the spectrum, else none
 */
export function processScans(scans: readonly Scan[], pool: ExpectedPool, choice: ShiftChoice): ScanOutcome[] {
  const shifts = new Map(scans.filter(one => one.isWaterScan).map(one => [one.tube.tubeNo, shiftOfScan(one)] as const))
  const spectra = scans.filter(one => !one.isWaterScan).map(scan => ({ scan, normalised: normaliseSpectrum(scan.raw) }))
  const pooled = pooledNoise(spectra.flatMap(({ normalised }) => normalised.ok ? [normalised] : []))
  const ready = spectra.map(({ scan, normalised: own }) => ({ scan, normalised: own.ok && pooled ? withNoise(scan, own, pooled) : own }))
  const dips = dipsOfTubes(ready)
  return ready.map(({ scan, normalised }) => {
    if (!normalised.ok) return { ...normalised, scan }
    const fromScan = shifts.get(scan.tube.tubeNo) ?? shifts.values().next().value ?? null
    return finishScan(scan, normalised, chooseShift(choice, fromScan, dips.get(scan.tube.tubeNo)!), pool)
  })
}

/**
 * The water of each tube by the dips of its spectra: they stand in one field, and strong B1 samples its wide dip better than weak B1 its narrow one. Mean by inverse variances, its error widened by
 * their scatter. The first refusal where no spectrum of the tube has a dip to read.
 */
function dipsOfTubes(ready: readonly { scan: Scan, normalised: NormalisedSpectrum | ExchangeRefusal }[]): Map<number, WaterShift | ExchangeRefusal> {
  const byTube = new Map<number, (WaterShift | ExchangeRefusal)[]>()
  for (const { scan, normalised } of ready) {
    if (normalised.ok) byTube.set(scan.tube.tubeNo, [...byTube.get(scan.tube.tubeNo) ?? [], shiftByWaterDip(normalised)])
  }
  return new Map([...byTube].map(([tubeNo, dips]) => [tubeNo, meanShift(dips.filter(one => one.ok)) ?? dips[0]!]))
}

function meanShift(dips: readonly WaterShift[]): WaterShift | null {
  const [first] = dips
  const known = dips.filter((one): one is WaterShift & { se_ppm: number } => one.se_ppm !== null && one.se_ppm > 0)
  if (first === undefined || dips.length === 1 || known.length < dips.length) return first ?? null
  const { mean, se, chi2 } = inverseVarianceMean(known.map(one => one.shift_ppm), known.map(one => one.se_ppm))
  const asymmetries = dips.flatMap(one => one.asymmetry ?? [])
  return { ok: true, method: 'waterDip', shift_ppm: mean, se_ppm: se * Math.sqrt(Math.max(1, chi2 / (dips.length - 1))), points: dips.reduce((sum, one) => sum + one.points, 0), asymmetry: asymmetries.length === dips.length ? Math.min(...asymmetries) : null }
}

interface PooledNoise { readonly relative: number, readonly dof: number }

/** Noise over S0 from the repeats of all spectra of a sample: two repeats of one spectrum know it to half its size only. Null where nothing was repeated. */
function pooledNoise(spectra: readonly NormalisedSpectrum[]): PooledNoise | null {
  const own = spectra.flatMap(({ noise, s0_au }) => noise && noise.from !== 'given' && noise.dof !== null ? [{ square: (noise.sd_au / s0_au) ** 2, dof: noise.dof }] : [])
  const dof = own.reduce((sum, one) => sum + one.dof, 0)
  return dof > 0 ? { relative: Math.sqrt(own.reduce((sum, one) => sum + one.dof * one.square, 0) / dof), dof } : null
}

function withNoise({ raw }: Scan, own: NormalisedSpectrum, { relative, dof }: PooledNoise): NormalisedSpectrum | ExchangeRefusal {
  if (own.noise?.from === 'given') return own
  const again = normaliseSpectrum({ ...raw, sd_au: relative * own.s0_au })
  return again.ok && again.noise ? { ...again, noise: { ...again.noise, from: own.noise?.from ?? 's0Repeats', dof } } : again
}

/** A water scan needs no S0: its shape alone is used. */
function shiftOfScan({ raw }: Scan): WaterShift | ExchangeRefusal {
  const highest = Math.max(...raw.signal_au)
  const normalised = normaliseSpectrum(raw.s0.length > 0 ? raw : { ...raw, s0: [{ signal_au: highest, order: null }] })
  return normalised.ok ? shiftBySymmetry(normalised) : normalised
}

interface Chosen { readonly shift: WaterShift, readonly flags: readonly ExchangeFlag[] }

function chooseShift(choice: ShiftChoice, fromScan: WaterShift | ExchangeRefusal | null, dip: WaterShift | ExchangeRefusal): Chosen {
  const failed = (refusal: ExchangeRefusal): ExchangeFlag => ({ id: 'shiftNotFound', title: 'Water shift not found', sentence: `${refusal.message} Needed: ${refusal.accepted}` })
  if (choice === 'none') return { shift: noShift, flags: [] }
  if (choice === 'wassr' && fromScan === null) return { shift: noShift, flags: [{ id: 'noWaterScan', title: 'No water scan', sentence: 'No spectrum at the B1 of the water scan belongs to this sample, so no shift was applied. Name the B1 of the water scan, or use the dip of the spectrum.' }] }
  if (choice !== 'waterDip' && fromScan !== null) {
    if (fromScan.ok) return { shift: fromScan, flags: [] }
    if (choice === 'wassr') return { shift: noShift, flags: [failed(fromScan)] }
  }
  const flags = fromScan !== null && !fromScan.ok ? [failed(fromScan)] : []
  return dip.ok ? { shift: dip, flags } : { shift: noShift, flags: [...flags, failed(dip)] }
}

function finishScan(scan: Scan, normalised: NormalisedSpectrum, { shift, flags }: Chosen, pool: ExpectedPool): ProcessedScan {
  const centred: CentredSpectrum = { offset_ppm: normalised.offset_ppm.map(at => at - shift.shift_ppm), z: normalised.z, zSe: normalised.zSe, s0RelativeSe: normalised.s0RelativeSe, shiftSe_ppm: shift.se_ppm }
  const mirror = readMirrored(centred, pool.offset_ppm)
  const area = asymmetryArea(centred, [pool.offset_ppm - Math.sign(pool.offset_ppm) * Math.min(pool.width_ppm / 2, Math.abs(pool.offset_ppm)), pool.offset_ppm + Math.sign(pool.offset_ppm) * pool.width_ppm / 2])
  return {
    ok: true, scan, normalised, shift, centred, mirror: mirror.ok ? mirror : null, lab: mirror.ok ? mirror.lab : labOnly(centred, pool.offset_ppm),
    area: area.ok ? { value: area.value, se: area.se } : null,
    flags: onceEach([...flags, ...(mirror.ok ? interpolationFlags(mirror, normalised.noise === null ? 0 : normalised.noise.sd_au / normalised.s0_au) : mirror.reason === 'saturated' ? [{ id: 'saturatedPool', title: 'Nothing left at the pool', sentence: `${mirror.message} ${mirror.accepted}` }] : []), ...spectrumFlags(normalised, shift, pool)]),
  }
}

const onceEach = (flags: readonly ExchangeFlag[]): ExchangeFlag[] => flags.filter((flag, i) => flags.findIndex(other => other.id === flag.id) === i)

const INTERPOLATION_LIMIT = 0.02

/** A dip that is narrower than the offsets can show is read too shallow, the more the weaker B1, and k comes out wrong by more than its error. */
function interpolationFlags({ interpolation, mtrAsym }: MirrorReading, noise: number): ExchangeFlag[] {
  const share = interpolation === null || mtrAsym.value === 0 ? 0 : Math.abs(interpolation / mtrAsym.value)
  if (share <= INTERPOLATION_LIMIT || Math.abs(interpolation!) <= 2 * noise) return []
  return [{ id: 'coarseSpacing', title: 'Offsets too far apart', sentence: `Two ways of interpolation differ by ${(100 * share).toPrecision(2)} % of the transfer at the pool: its dip is narrower than the offsets can show, and k may be off by as much. Add offsets around the pool, one at its centre.` }]
}

/** Z at the pool where the other side was not measured: noise of the two neighbours stands for its error. */
function labOnly({ offset_ppm, z, zSe }: CentredSpectrum, at: number): WithError | null {
  const value = createPchip(offset_ppm, z).at(at)
  if (Number.isNaN(value)) return null
  const next = Math.max(1, offset_ppm.findIndex(one => one >= at))
  return { value, se: zSe && Math.max(zSe[next]!, zSe[next - 1]!) }
}
