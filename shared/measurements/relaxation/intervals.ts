import type { NamedQuantity } from '../../evidence/quantity'
import { bootstrapFit } from '../../science/least-squares/bootstrap'
import type { FitData, FitOptions } from '../../science/least-squares/fitModel'
import type { FitDone } from '../../science/least-squares/outcome'
import { profileFit } from '../../science/least-squares/profileFit'
import type { Model } from '../../science/models/define'
import { BOOTSTRAP_DRAWS } from './options'

interface Parts {
  model: Model
  data: FitData
  fit: FitDone
  options: FitOptions
  choice: string
  seed: string
}

/** Parameters with the intervals that were asked for, and how these were found in words. A quantity without such an interval keeps Student's. */
export function withIntervals(parameters: readonly NamedQuantity[], parts: Parts): { parameters: NamedQuantity[], words: string } {
  const { fit, choice } = parts
  if (fit.noInterval) return { parameters: [...parameters], words: 'none' }
  const student = `Student t, ${fit.intervalDof === null ? 'unlimited' : fit.intervalDof} degrees of freedom`
  if (choice === 'profile') return { parameters: fromProfile(parameters, parts), words: 'profile of the sum of squares' }
  if (choice !== 'bootstrap') return { parameters: [...parameters], words: student }
  const { model, data, options, seed } = parts
  const found = bootstrapFit(model, data, fit, { ...options, seed, samples: BOOTSTRAP_DRAWS })
  if (!found.ok) return { parameters: [...parameters], words: `${student}: ${found.message}` }
  const ends = new Map(found.intervals.map(one => [one.name, one]))
  return {
    parameters: parameters.map((one) => { const end = ends.get(one.name); return end === undefined || one.interval === null ? one : { ...one, interval: [end.low, end.high] } }),
    words: `residual bootstrap, ${found.samples - found.failed} draws`,
  }
}

function fromProfile(parameters: readonly NamedQuantity[], { model, data, fit, options }: Parts): NamedQuantity[] {
  const found = new Map(profileFit(model, data, fit, options).map(one => [one.name, one.interval]))
  return parameters.map((one) => {
    const ends = found.get(one.name)
    if (ends === undefined) return one
    return { ...one, interval: ends.low === null || ends.high === null ? null : [ends.low, ends.high] }
  })
}
