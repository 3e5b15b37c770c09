import { fitLine, type LineDone } from '../least-squares/line'
import type { WithError } from './asymmetry'
import { refuseExchange, type ExchangeRefusal } from './refusal'
import { omega1_rad_per_s } from './transferForms'

/** plain: Z/(1 − Z) of the pool's side alone; inverse: 1/MTR_Rex, with direct saturation divided out by the other side. */
export type OmegaForm = 'plain' | 'inverse'

/** A reading at one B1: Z at the pool's offset (plain) or MTR_Rex (inverse). */
export interface OmegaPoint { readonly b1_uT: number, readonly value: number, readonly se: number | null }

export const OMEGA_ASSUMPTIONS: Readonly<Record<OmegaForm, string>> = {
  plain: 'Steady state (R1w·tsat of 5 or more) and no direct saturation at the pool; the concentration need not be known. Z/(1 − Z) against 1/ω1² is a straight line that crosses zero at −1/(k·(k + R2s)).',
  inverse: 'Steady state (R1w·tsat of 5 or more), direct saturation the same on both sides of water; the concentration need not be known. 1/MTR_Rex against 1/ω1² crosses zero at −1/(k·(k + R2s)).',
}

export interface OmegaPlot {
  readonly ok: true
  readonly form: OmegaForm
  /** √(k·(k + R2s)), what the crossing gives. */
  readonly apparent_per_s: WithError
  /** k with R2s taken out; null where R2s is not known: then k lies below the apparent value by about R2s/2. */
  readonly k_per_s: WithError | null
  /** Abscissa of each point, 1/ω1² in 10⁻⁶ s² rad⁻². */
  readonly points: readonly { readonly b1_uT: number, readonly inverseSquare: number, readonly ordinate: number, readonly se: number | null, readonly fitted: number }[]
  /** Positions in the input that have no ordinate, with the reason. */
  readonly leftOut: readonly { readonly index: number, readonly reason: string }[]
  readonly line: LineDone
  /** Share of the apparent rate's standard error that is not from the scale of B1. */
  readonly noiseSe_per_s: number | null
}

/** 1/ω1² grows unhandy in SI: 10⁻⁶ s² rad⁻² is the unit of the axis. */
const UNIT = 1e6

/**
 * Omega plot: the exchange rate from a straight line, without the concentration.
 * @param r2s_per_s transverse relaxation of the pool, where it is known
 * @param b1RelativeSe relative standard error of the scale of B1, shared by all points: k moves in proportion
 * @source Dixon et al., Magn. Reson. Med. 63, 625 (2010)
 */
export function omegaPlot(readings: readonly OmegaPoint[], form: OmegaForm, { r2s_per_s, b1RelativeSe }: { r2s_per_s: number | null, b1RelativeSe: number }): OmegaPlot | ExchangeRefusal {
  const bad = readings.findIndex(one => !(one.b1_uT > 0 && one.b1_uT < Infinity) || !Number.isFinite(one.value))
  if (bad >= 0) return refuseExchange('badPoint', `Reading ${bad + 1}: B1 ${readings[bad]!.b1_uT} µT, value ${readings[bad]!.value}.`, 'B1 above zero and a number for each.')
  const leftOut = readings.flatMap((one, index) => {
    const reason = form === 'plain' ? (one.value >= 1 ? 'Z of 1 or more: no transfer' : one.value <= 0 ? 'Z of 0 or less: saturated' : null) : one.value <= 0 ? 'MTR_Rex of 0 or less: no transfer' : null
    return reason === null ? [] : [{ index, reason }]
  })
  const kept = readings.filter((_, index) => leftOut.every(one => one.index !== index))
  if (new Set(kept.map(one => one.b1_uT)).size < 3) return refuseExchange('tooFewB1', `${new Set(kept.map(one => one.b1_uT)).size} different B1 with transfer; an omega plot needs three to show that it is straight.`, 'Three B1 or more.')
  const hasErrors = kept.every(one => one.se !== null && one.se > 0)
  const ordinate = (z: number) => form === 'plain' ? z / (1 - z) : 1 / z
  const steepness = (z: number) => form === 'plain' ? 1 / (1 - z) ** 2 : 1 / z ** 2
  const x = kept.map(one => UNIT / omega1_rad_per_s(one.b1_uT) ** 2)
  const sigma = hasErrors ? kept.map(one => one.se! * steepness(one.value)) : null
  const line = fitLine({ x, y: kept.map(one => ordinate(one.value)), sigma })
  if (!line.ok) return refuseExchange(line.reason, line.message, line.accepted)
  if (!(line.slope > 0)) return refuseExchange('slopeNotPositive', 'Transfer does not grow with B1: the line does not rise with 1/ω1².', 'A range of B1 in which the pool is partly saturated.')
  if (!(line.intercept > 0)) return refuseExchange('noCrossing', 'The line does not cross zero at a negative 1/ω1²: α stays far below 0.5 at every B1, so that only a lower limit of k could be had.', 'Stronger B1, until the transfer levels off.')
  return describeOmega(line, { form, readings: kept, x, sigma, leftOut, ordinate: kept.map(one => ordinate(one.value)) }, { r2s_per_s, b1RelativeSe })
}

interface Drawn {
  readonly form: OmegaForm
  readonly readings: readonly OmegaPoint[]
  readonly x: readonly number[]
  readonly sigma: readonly number[] | null
  readonly leftOut: OmegaPlot['leftOut']
  readonly ordinate: readonly number[]
}

function describeOmega(line: LineDone, { form, readings, x, sigma, leftOut, ordinate }: Drawn, { r2s_per_s, b1RelativeSe }: { r2s_per_s: number | null, b1RelativeSe: number }): OmegaPlot {
  const apparent = Math.sqrt((UNIT * line.slope) / line.intercept)
  // ln of the crossing's root: half of ln slope − ln intercept
  const relative = line.slopeSe === null || line.interceptSe === null || line.covariance === null
    ? null
    : Math.sqrt(Math.max(0, (line.slopeSe / line.slope) ** 2 + (line.interceptSe / line.intercept) ** 2 - (2 * line.covariance) / (line.slope * line.intercept))) / 2
  const apparentSe = relative === null ? null : apparent * Math.hypot(relative, b1RelativeSe)
  return {
    ok: true, form, line, leftOut, apparent_per_s: { value: apparent, se: apparentSe }, noiseSe_per_s: relative === null ? null : apparent * relative,
    k_per_s: r2s_per_s === null ? null : withoutR2s(apparent, apparentSe, r2s_per_s),
    points: readings.map((one, i) => ({ b1_uT: one.b1_uT, inverseSquare: x[i]!, ordinate: ordinate[i]!, se: sigma && sigma[i]!, fitted: line.points[i]!.fitted })),
  }
}

/** k from √(k·(k + R2s)): the positive root of k² + R2s·k − apparent² = 0. */
function withoutR2s(apparent: number, se: number | null, r2s: number): WithError {
  const root = Math.sqrt(r2s * r2s / 4 + apparent * apparent)
  // the same as root − R2s/2, without the loss of digits where R2s is large
  return { value: (apparent * apparent) / (root + r2s / 2), se: se && (se * apparent) / root }
}
