import { exactLog } from '../exactMath'
import { omega1_rad_per_s, protonFraction } from './transferForms'
import { logNormal, normals, quantileOf, type Seed } from '../placement/sampling'
import { detectionConcentration, HIGHEST_MM, tissueZ, type Detection, type DetectionAgent, type DetectionInput } from './detection'
import { concentrationGrid } from './firstReach'
import { ppmToRadPerS } from './poolSystem'
import { refuseExchange, type ExchangeRefusal } from './refusal'
import { exchangeLine, zOfRate, type Decay } from './rotatingFrame'

/** Standard errors of what goes in; absent or null: it does not vary. */
export interface DetectionErrors {
  readonly agent?: Partial<Record<Exclude<keyof DetectionAgent, 'protons'>, number | null>>
  readonly tissueRate1_per_s?: number | null
  readonly tissueRate2_per_s?: number | null
  readonly macromolecules?: { readonly ratio?: number | null, readonly exchange_per_s?: number | null }
  /** Relative. */
  readonly b1_frac?: number | null
}

export interface DetectionDraws {
  readonly ok: true
  /** At the values given. */
  readonly point: Detection
  readonly draws: number
  /** Share of draws in which the drop is reached. */
  readonly reached_frac: number
  /** 2.5, 50 and 97.5 % of the concentrations of all draws; null where the drop is not reached up to the highest concentration in so many of them. */
  readonly quantiles_mM: { readonly low: number | null, readonly median: number | null, readonly high: number | null }
  /** Standard deviation of ln c over the draws that reached; null where fewer than two did. */
  readonly logSe: number | null
  /** Concentration of every draw; ∞ where not reached. */
  readonly conc_mM: Float64Array
}

export const DETECTION_DRAWS = 4096
/** A concentration is found when it moves by less than this. */
const SETTLED = 1e-4
const MOST_TURNS = 12
/** A drop that misses the target by less than this share is looked for by the full equations. */
const NEARLY = 0.1

/**
 * Detection concentration with its uncertainty by seeded draws. Positive inputs are log-normal with the value as median, the shift is normal; inputs are independent.
 * Every draw is solved by the full equations: the rotating-frame picture only says where to look, and is corrected at each concentration looked at.
 */
export function drawDetection(input: DetectionInput, errors: DetectionErrors, { seed, draws = DETECTION_DRAWS }: { seed: Seed, draws?: number }): DetectionDraws | ExchangeRefusal {
  const point = detectionConcentration(input)
  if (!point.ok) return point
  if (!(draws >= 1 && Number.isInteger(draws))) return refuseExchange('badDraws', `${draws} draws are asked for.`, 'A whole number above 0.')
  const bad = [...Object.values(errors.agent ?? {}), ...Object.values(errors.macromolecules ?? {}), errors.tissueRate1_per_s, errors.tissueRate2_per_s, errors.b1_frac].find(se => se != null && !(se >= 0 && se < Infinity))
  if (bad !== undefined) return refuseExchange('badError', `A standard error is ${bad}.`, 'Standard errors not below 0, or none.')
  const columns = drawInputs(input, errors, seed, draws)
  const grid = concentrationGrid(input.setting.highest_mM ?? HIGHEST_MM)
  const conc_mM = new Float64Array(draws)
  for (let d = 0; d < draws; d++) conc_mM[d] = solveDraw(inputOf(input, columns, d), grid)
  const reached = conc_mM.filter(c => c < Infinity)
  const sorted = conc_mM.slice().sort()
  const quantile = (fraction: number) => {
    const value = quantileOf(sorted, fraction)
    return value < Infinity ? value : null
  }
  return { ok: true, point, draws, reached_frac: reached.length / draws, quantiles_mM: { low: quantile(0.025), median: quantile(0.5), high: quantile(0.975) }, logSe: spreadOfLog(reached), conc_mM }
}

function spreadOfLog(values: Float64Array): number | null {
  if (values.length < 2) return null
  const logs = values.map(x => exactLog(x))
  const mean = logs.reduce((sum, x) => sum + x, 0) / logs.length
  return Math.sqrt(logs.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (logs.length - 1))
}

const AGENT_INPUTS = ['shift_ppm', 'exchange_per_s', 'rate1_per_s', 'rate2_per_s', 'r1_per_mM_s', 'r2_per_mM_s'] as const
type Columns = Readonly<Record<(typeof AGENT_INPUTS)[number] | 'tissueRate1_per_s' | 'tissueRate2_per_s' | 'ratio' | 'macroExchange_per_s' | 'b1_uT', Float64Array | null>>

function drawInputs({ agent, tissue, setting }: DetectionInput, errors: DetectionErrors, seed: Seed, n: number): Columns {
  const column = (name: string, value: number | undefined, se: number | null | undefined, isSigned = false): Float64Array | null => {
    if (value === undefined || se == null || se === 0 || (!isSigned && value === 0)) return null
    const z = normals(seed, ['detection', name], n)
    return isSigned ? z.map(x => value + se * x) : logNormal(value, se, z)
  }
  const macro = tissue.macromolecules
  return {
    ...Object.fromEntries(AGENT_INPUTS.map(name => [name, column(name, agent[name], errors.agent?.[name], name === 'shift_ppm')])) as Record<(typeof AGENT_INPUTS)[number], Float64Array | null>,
    tissueRate1_per_s: column('tissueRate1_per_s', tissue.rate1_per_s, errors.tissueRate1_per_s), tissueRate2_per_s: column('tissueRate2_per_s', tissue.rate2_per_s, errors.tissueRate2_per_s),
    ratio: column('macroRatio', macro?.ratio, errors.macromolecules?.ratio), macroExchange_per_s: column('macroExchange_per_s', macro?.exchange_per_s, errors.macromolecules?.exchange_per_s),
    b1_uT: column('b1', setting.b1_uT, errors.b1_frac == null ? null : errors.b1_frac * setting.b1_uT),
  }
}

function inputOf({ agent, tissue, setting }: DetectionInput, columns: Columns, d: number): DetectionInput {
  const pick = (name: keyof Columns, value: number) => columns[name]?.[d] ?? value
  const macro = tissue.macromolecules
  return {
    agent: {
      protons: agent.protons, shift_ppm: pick('shift_ppm', agent.shift_ppm), exchange_per_s: pick('exchange_per_s', agent.exchange_per_s), rate1_per_s: pick('rate1_per_s', agent.rate1_per_s),
      rate2_per_s: pick('rate2_per_s', agent.rate2_per_s), r1_per_mM_s: pick('r1_per_mM_s', agent.r1_per_mM_s), r2_per_mM_s: pick('r2_per_mM_s', agent.r2_per_mM_s),
    },
    tissue: {
      rate1_per_s: pick('tissueRate1_per_s', tissue.rate1_per_s), rate2_per_s: pick('tissueRate2_per_s', tissue.rate2_per_s),
      macromolecules: macro && { ...macro, ratio: pick('ratio', macro.ratio), exchange_per_s: pick('macroExchange_per_s', macro.exchange_per_s) },
    },
    // The irradiation stays where the pool is thought to be.
    setting: { ...setting, b1_uT: pick('b1_uT', setting.b1_uT), offset_ppm: setting.offset_ppm ?? agent.shift_ppm },
  }
}

/** Z in the rotating-frame picture as a function of the concentration. */
function pictureOf({ agent, tissue, setting }: DetectionInput): (conc_mM: number) => number {
  const perPpm = ppmToRadPerS(setting.field_T)
  const square = omega1_rad_per_s(setting.b1_uT) ** 2
  const place = (setting.offset_ppm ?? agent.shift_ppm) * perPpm
  const cosSquare = (place * place) / (place * place + square)
  const perMM = protonFraction(agent.protons, 1) * exchangeLine(agent, square, agent.shift_ppm * perPpm - place)
  const { macromolecules: macro } = tissue
  const broad = macro ? macro.ratio * exchangeLine({ exchange_per_s: macro.exchange_per_s, rate2_per_s: 1 / macro.t2_s }, square, -place) : 0
  return (conc_mM) => {
    const rate1 = tissue.rate1_per_s + agent.r1_per_mM_s * conc_mM
    const rate = rate1 * cosSquare + (tissue.rate2_per_s + agent.r2_per_mM_s * conc_mM) * (1 - cosSquare) + perMM * conc_mM + broad
    const decay: Decay = { cosSquare, rate1_per_s: rate1, duration_s: setting.duration_s, initial_frac: 1 }
    return zOfRate(rate, decay)
  }
}

/** Where the full equations were solved, and their Z over that of the picture. */
interface Known { readonly conc_mM: number, readonly factor: number }

/** @returns the concentration, or ∞ where the drop is not reached */
function solveDraw(input: DetectionInput, grid: Float64Array): number {
  const picture = pictureOf(input)
  const zWithout = tissueZ(input, 0)
  const target = zWithout - input.setting.drop_points / 100
  const values = grid.map(picture)
  let low: Known = { conc_mM: 0, factor: zWithout / picture(0) }
  let high: Known | null = null
  let isLost = false
  let before = Infinity
  for (let turn = 0; turn < MOST_TURNS; turn++) {
    const corrected = (conc_mM: number, z: number) => z * factorAt(low, high, conc_mM)
    let i = 0
    while (i < grid.length && corrected(grid[i]!, values[i]!) > target) i++
    const isFound = i < grid.length
    const lowest = isFound ? -1 : lowestOf(grid, values, corrected)
    if (!isFound && isLost) {
      if (corrected(grid[lowest]!, values[lowest]!) - target > NEARLY * (zWithout - target)) return Infinity
      break
    }
    const conc_mM = isFound ? cross(c => corrected(c, picture(c)) - target, i === 0 ? 0 : grid[i - 1]!, grid[i]!) : grid[lowest]!
    if (isFound && Math.abs(conc_mM - before) <= SETTLED * conc_mM) return conc_mM
    before = isFound ? conc_mM : Infinity
    isLost = !isFound
    const z = tissueZ(input, conc_mM)
    const known = { conc_mM, factor: z / picture(conc_mM) }
    low = high ?? low
    high = known
  }
  // The picture decides nothing next to a maximum that just touches the target: looked for without it.
  const full = detectionConcentration(input)
  if (!full.ok) throw new Error(full.message)
  return full.kind === 'reached' ? full.conc_mM : Infinity
}

function factorAt(low: Known, high: Known | null, conc_mM: number): number {
  if (high === null || high.conc_mM === low.conc_mM) return (high ?? low).factor
  const share = Math.min(1, Math.max(0, (conc_mM - low.conc_mM) / (high.conc_mM - low.conc_mM)))
  return low.factor + share * (high.factor - low.factor)
}

function lowestOf(grid: Float64Array, values: Float64Array, corrected: (conc_mM: number, z: number) => number): number {
  let best = 0
  for (let i = 1; i < grid.length; i++) if (corrected(grid[i]!, values[i]!) < corrected(grid[best]!, values[best]!)) best = i
  return best
}

/** Zero of a function that is above it at `from` and not at `to`. */
function cross(f: (conc_mM: number) => number, from: number, to: number): number {
  let [low, high] = [from, to]
  for (let turn = 0; turn < 40 && high - low > 1e-9 * high; turn++) {
    const middle = 0.5 * (low + high)
    if (f(middle) > 0) low = middle
    else high = middle
  }
  return high
}
