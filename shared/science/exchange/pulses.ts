import { polynomial } from './polynomial'
import { scalingOf, setOffset, setSystem, solveSteady, squareTimes, type Propagator } from './propagator'
import { propagatorOf } from './spectrum'
import { ppmToRadPerS, type PoolSystem } from './poolSystem'

/** A train of equal shaped pulses, each cut into pieces of constant B1, with a pause after every pulse. */
export interface PulseTrain {
  readonly pieces: readonly { readonly b1_uT: number, readonly duration_s: number }[]
  readonly pause_s: number
  readonly pulses: number
  /** The transverse magnetisation is destroyed at the end of every pause. */
  readonly isSpoiled: boolean
  /** Magnetisation along the field before the train over its equilibrium; default 1. */
  readonly initial_frac?: number
}

/** e^{At} of one piece and its steady state, at one offset. */
interface Step { readonly b1_uT: number, readonly duration_s: number, readonly g: Float64Array, readonly steady: Float64Array, readonly change: Float64Array }

/** What is outside the domain; null when nothing is. */
export function faultOfTrain({ pieces, pause_s, pulses, initial_frac = 1 }: PulseTrain): string | null {
  if (pieces.length === 0 || !(pulses >= 1 && Number.isInteger(pulses))) return 'A train needs at least one pulse with at least one piece.'
  if (pieces.some(one => !(one.b1_uT >= 0 && one.b1_uT < Infinity && one.duration_s > 0 && one.duration_s < Infinity))) return 'Every piece of a pulse needs a B1 not below 0 µT and a duration above 0 s.'
  if (!(pause_s >= 0 && pause_s < Infinity)) return 'The pause between pulses must not be below 0 s.'
  return Number.isFinite(initial_frac) ? null : 'The magnetisation before saturation must be a number.'
}

/**
 * Z after a train of pulses at each offset: exact for the pieces given. The phase of the pulses is the same throughout.
 * @returns NaN where a number given is NaN; see `faultOfSystem` and `faultOfTrain` for the domain
 */
export function pulsedSpectrum(system: PoolSystem, train: PulseTrain, offsets_ppm: ArrayLike<number>, out = new Float64Array(offsets_ppm.length)): Float64Array {
  const state = propagatorOf(system.solutes.length + 1)
  const sequence = train.pause_s > 0 ? [...train.pieces, { b1_uT: 0, duration_s: train.pause_s }] : train.pieces
  const { steps, order } = stepsOf(state, sequence)
  const perPpm = ppmToRadPerS(system.field_T)
  const m = new Float64Array(state.n)
  for (let i = 0; i < offsets_ppm.length; i++) {
    for (const step of steps) fillStep(state, system, step, offsets_ppm[i]! * perPpm)
    m.fill(0)
    for (let p = 0; p < state.pools; p++) m[3 * p + 2] = (train.initial_frac ?? 1) * state.roots[p]!
    for (let pulse = 0; pulse < train.pulses; pulse++) {
      for (const at of order) take(state, steps[at]!, m)
      if (train.isSpoiled) for (let k = 0; k < state.n; k++) if (k % 3 !== 2) m[k] = 0
    }
    out[i] = m[2]!
  }
  return out
}

/** Pieces of equal B1 and duration, such as the two sides of a symmetric pulse, share a step. */
function stepsOf(state: Propagator, sequence: PulseTrain['pieces']): { steps: Step[], order: number[] } {
  const steps: Step[] = []
  const order = sequence.map(({ b1_uT, duration_s }) => {
    const found = steps.findIndex(step => step.b1_uT === b1_uT && step.duration_s === duration_s)
    if (found >= 0) return found
    return steps.push({ b1_uT, duration_s, g: new Float64Array(state.matrix.length), steady: new Float64Array(state.n), change: new Float64Array(state.n) }) - 1
  })
  return { steps, order }
}

/** Fills M ↦ F·M + (M_ss − F·M_ss). */
function fillStep(state: Propagator, system: PoolSystem, step: Step, offset_rad_per_s: number): void {
  setSystem(state, system, step.b1_uT)
  const norm = setOffset(state, offset_rad_per_s)
  solveSteady(state)
  const { squarings, step_s } = scalingOf(norm, step.duration_s)
  step.g.set(squareTimes(state, polynomial(state, step_s), squarings))
  step.steady.set(state.steady)
  state.kernel.apply(step.change, step.g, step.steady)
  for (let i = 0; i < state.n; i++) step.change[i] = step.steady[i]! - step.change[i]!
}

function take(state: Propagator, step: Step, m: Float64Array): void {
  state.kernel.apply(state.other, step.g, m)
  for (let i = 0; i < state.n; i++) m[i] = state.other[i]! + step.change[i]!
}
