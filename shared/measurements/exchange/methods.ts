import type { WithError } from '../../science/exchange/asymmetry'
import { OMEGA_ASSUMPTIONS, omegaPlot, type OmegaForm } from '../../science/exchange/omegaPlot'
import { omegaFlags, transferFlags, type RateConditions } from '../../science/exchange/rateFlags'
import { refuseExchange, type ExchangeRefusal } from '../../science/exchange/refusal'
import type { ExchangeFlag } from '../../science/exchange/spectrumFlags'
import { fitTransfer, type TransferFit, type TransferPoint } from '../../science/exchange/transferFit'
import { TRANSFER_ASSUMPTIONS, transferAt, type TransferForm } from '../../science/exchange/transferForms'
import { logInterval } from '../../science/kinetics/firstOrder'
import type { FigureSpec } from '../../schemas/figure'
import type { ProcessedScan } from './processScan'
import type { Sample } from './samples'

/** Methods of one sample, each by itself, and those through all points of all samples at once. */
export const SAMPLE_METHODS = ['quespInverse', 'quesp', 'quest', 'omegaInverse', 'omega'] as const
export const GLOBAL_METHODS = ['global', 'globalTwo'] as const
export const METHOD_IDS = [...SAMPLE_METHODS, ...GLOBAL_METHODS] as const
export type SampleMethod = (typeof SAMPLE_METHODS)[number]
export type MethodId = (typeof METHOD_IDS)[number]

export const METHOD_TITLES: Readonly<Record<MethodId, string>> = {
  quespInverse: 'QUESP, inverse metric', quesp: 'QUESP', quest: 'QUEST', omegaInverse: 'Omega plot, inverse metric', omega: 'Omega plot',
  global: 'Bloch–McConnell, all spectra', globalTwo: 'Bloch–McConnell, all spectra, a second pool',
}

export interface DrawnPoint { readonly tubeNo: number, readonly label: string, readonly x: number, readonly y: number, readonly ySe: number | null, readonly fitted: number }

/** What one method says of one sample. */
export interface MethodDone {
  readonly ok: true
  readonly k_per_s: WithError & { readonly interval: readonly [number, number] | null }
  /** Part of the standard error that the scale of B1 makes; samples share it. */
  readonly b1Se_per_s: number
  /** Fitted fraction of protons over the typed one; null where either is missing. */
  readonly protonRatio: WithError | null
  readonly assumptions: string
  readonly flags: readonly ExchangeFlag[]
  readonly points: readonly DrawnPoint[]
  readonly line: readonly { readonly x: number, readonly y: number }[]
  readonly axes: { readonly x: FigureSpec['x'], readonly y: FigureSpec['y'] }
}
export type MethodOutcome = MethodDone | ExchangeRefusal

const OMEGA_X = { label: '1/ω_1^{2}', unit: '10^{-6} s^{2}', scale: 'linear' } as const
const AXES = {
  b1: { label: 'B_1', unit: 'µT', scale: 'linear' }, tsat: { label: 'Saturation time', unit: 's', scale: 'linear' },
  ptr: { label: 'PTR', unit: null, scale: 'linear' }, rex: { label: 'MTR_{Rex}', unit: null, scale: 'linear' },
  plain: { label: 'Z/(1 − Z)', unit: null, scale: 'linear' }, inverse: { label: '1/MTR_{Rex}', unit: null, scale: 'linear' },
} as const

export function methodOf(id: SampleMethod, sample: Sample): MethodOutcome {
  if (id === 'omega' || id === 'omegaInverse') return byOmega(sample, id === 'omega' ? 'plain' : 'inverse')
  if (id === 'quest') return byQuest(sample)
  return id === 'quesp' ? byQuesp(sample, sample.r1w === null ? 'steady' : 'buildUp') : byQuesp(sample, 'inverse')
}

/** The longest saturation at each B1. */
function longestOf(scans: readonly ProcessedScan[]): ProcessedScan[] {
  const longest = new Map<number, ProcessedScan[]>()
  for (const one of scans) {
    const before = longest.get(one.scan.b1_uT) ?? []
    const held = before[0]?.scan.tsat_s ?? -Infinity
    if (one.scan.tsat_s > held) longest.set(one.scan.b1_uT, [one])
    else if (one.scan.tsat_s === held) longest.set(one.scan.b1_uT, [...before, one])
  }
  return [...longest.values()].flat().sort((a, b) => a.scan.b1_uT - b.scan.b1_uT)
}

/** Errors count only where every reading has one. */
const common = <T extends { se: number | null }>(points: readonly T[]): T[] => points.every(one => one.se !== null && one.se > 0) ? [...points] : points.map(one => ({ ...one, se: null }))

const noMirror = (): ExchangeRefusal => refuseExchange('noReference', 'No spectrum holds the pool and its mirror image.', 'Offsets on both sides of water, around the pool and opposite it.')

function conditionsOf(sample: Sample, scans: readonly ProcessedScan[]): RateConditions {
  return {
    b1s_uT: scans.map(one => one.scan.b1_uT), tsat_s: scans.map(one => one.scan.tsat_s), r1w_per_s: sample.r1w?.value ?? null, r2s_per_s: sample.r2s_per_s,
    opposite: scans.every(one => one.mirror !== null) ? scans.map(one => one.mirror!.ref.value) : null,
  }
}

function byQuesp(sample: Sample, form: TransferForm): MethodOutcome {
  const scans = longestOf(sample.scans.filter(one => one.mirror !== null))
  if (scans.length === 0) return noMirror()
  return byTransfer(sample, scans, { form, x: null, over: 'b1' })
}

function byQuest(sample: Sample): MethodOutcome {
  const scans = sample.scans.filter(one => one.mirror !== null)
  if (scans.length === 0) return noMirror()
  if (new Set(scans.map(one => one.scan.tsat_s)).size < 3) return refuseExchange('tooFewTimes', `${new Set(scans.map(one => one.scan.tsat_s)).size} saturation time${scans.length === 1 ? '' : 's'}; QUEST needs three.`, 'The same B1 at three saturation times or more.')
  if (sample.x === null) return refuseExchange('noFraction', 'QUEST needs the number of exchanging protons and the concentration.', 'The number of exchanging protons typed.')
  return byTransfer(sample, scans, { form: 'buildUp', x: sample.x, over: 'tsat' })
}

interface TransferPlan { readonly form: TransferForm, readonly x: WithError | null, readonly over: 'b1' | 'tsat' }

function byTransfer(sample: Sample, scans: readonly ProcessedScan[], { form, x, over }: TransferPlan): MethodOutcome {
  const points: TransferPoint[] = common(scans.map(({ scan, mirror }) => {
    const measured = form === 'inverse' ? mirror!.mtrRex : mirror!.ptr
    return { b1_uT: scan.b1_uT, tsat_s: scan.tsat_s, value: measured.value, se: measured.se }
  }))
  const fit = fitTransfer(points, { form, x, r1w_per_s: sample.r1w, r2s_per_s: sample.r2s_per_s ?? 0, start: form === 'buildUp' ? sample.start : 1, b1RelativeSe: sample.facts.b1Se_frac })
  if (!fit.ok) return fit
  return {
    ok: true, k_per_s: fit.k_per_s, b1Se_per_s: fit.sources.find(one => one.name === 'b1')?.se_per_s ?? 0, protonRatio: x === null ? ratioOf(fit, sample.x) : null,
    assumptions: TRANSFER_ASSUMPTIONS[form], flags: transferFlags(fit, conditionsOf(sample, scans), { x: x === null ? sample.x : null }),
    points: scans.map(({ scan }, i) => ({ tubeNo: scan.tube.tubeNo, label: labelOf(scan), x: over === 'b1' ? scan.b1_uT : scan.tsat_s, y: points[i]!.value, ySe: points[i]!.se, fitted: fit.fitted[i]! })),
    line: curveOf(fit, sample, scans, { form, x, over }), axes: { x: over === 'b1' ? AXES.b1 : AXES.tsat, y: form === 'inverse' ? AXES.rex : AXES.ptr },
  }
}

const labelOf = ({ tube, nominalB1_uT, tsat_s }: ProcessedScan['scan']): string => `${tube.label}, ${nominalB1_uT} µT, ${tsat_s} s`

function ratioOf({ x }: TransferFit, typed: WithError | null): WithError | null {
  if (x === null || typed === null) return null
  return { value: x.value / typed.value, se: x.se === null ? null : Math.hypot(x.se / x.value, (typed.se ?? 0) / typed.value) * (x.value / typed.value) }
}

const CURVE_POINTS = 48

/** The fitted form along the axis; only where one curve serves all points. */
function curveOf(fit: TransferFit, sample: Sample, scans: readonly ProcessedScan[], { form, over }: TransferPlan): { x: number, y: number }[] {
  const other = new Set(scans.map(one => over === 'b1' ? one.scan.tsat_s : one.scan.b1_uT))
  if (other.size > 1 && !(over === 'b1' && form !== 'buildUp')) return []
  const held = [...other][0]!
  const last = Math.max(...scans.map(one => over === 'b1' ? one.scan.b1_uT : one.scan.tsat_s))
  const r1w = sample.r1w?.value ?? 1
  const x = fit.x?.value ?? fit.xOverR1w_s!.value
  return Array.from({ length: CURVE_POINTS }, (_, i) => {
    const at = (last * (i + 1)) / CURVE_POINTS
    const y = transferAt(form, { k_per_s: fit.k_per_s.value, x, b1_uT: over === 'b1' ? at : held, tsat_s: over === 'b1' ? held : at }, { r1w_per_s: r1w, r2s_per_s: sample.r2s_per_s ?? 0, start: form === 'buildUp' ? sample.start : 1 })
    return { x: Number(at.toPrecision(6)), y: Number(y.toPrecision(6)) }
  })
}

function byOmega(sample: Sample, form: OmegaForm): MethodOutcome {
  const scans = longestOf(sample.scans.filter(one => form === 'plain' ? one.lab !== null : one.mirror !== null))
  if (scans.length === 0) return form === 'plain' ? refuseExchange('noPool', 'No spectrum holds the pool.', 'Offsets around the pool.') : noMirror()
  const readings = common(scans.map(({ scan, lab, mirror }) => ({ b1_uT: scan.b1_uT, ...(form === 'plain' ? lab! : mirror!.mtrRex) })))
  const plot = omegaPlot(readings, form, { r2s_per_s: sample.r2s_per_s, b1RelativeSe: sample.facts.b1Se_frac })
  if (!plot.ok) return plot
  const kept = scans.filter((_, index) => plot.leftOut.every(one => one.index !== index))
  const k = plot.k_per_s ?? plot.apparent_per_s
  const mtrRex = kept.every(one => one.mirror !== null) ? kept.map(one => one.mirror!.mtrRex.value) : null
  const widest = Math.max(...plot.points.map(one => one.inverseSquare))
  const from = -plot.line.intercept / plot.line.slope
  return {
    ok: true, k_per_s: { ...k, interval: k.se === null ? null : logInterval(k.value, k.se) }, b1Se_per_s: sample.facts.b1Se_frac * k.value, protonRatio: null, assumptions: OMEGA_ASSUMPTIONS[form],
    flags: omegaFlags(plot, conditionsOf(sample, kept), { mtrRex }),
    points: plot.points.map((one, i) => ({ tubeNo: kept[i]!.scan.tube.tubeNo, label: labelOf(kept[i]!.scan), x: one.inverseSquare, y: one.ordinate, ySe: one.se, fitted: one.fitted })),
    line: [from, widest].map(x => ({ x, y: plot.line.intercept + plot.line.slope * x })), axes: { x: OMEGA_X, y: AXES[form] },
  }
}
