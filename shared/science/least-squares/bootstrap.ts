import { createRandom } from '../random'
import type { Model } from '../models/define'
import { fitModel, type FitData, type FitOptions } from './fitModel'
import { informationOf } from './covariance'
import { prepareData } from './fitData'
import type { FitDone } from './outcome'

export interface BootstrapDone {
  readonly ok: true
  /** Per parameter, in the order of the fit: percentiles of the refitted values. */
  readonly intervals: readonly { readonly name: string, readonly low: number, readonly high: number, readonly sd: number }[]
  readonly samples: number
  /** Refits that were refused or did not converge; they are left out. */
  readonly failed: number
}

/** Share of failed refits above which the rest no longer stand for the whole. */
const LARGEST_FAILED = 0.1

/**
 * Residual bootstrap: residuals, each divided by √(1 − leverage) and centred, are drawn with replacement, put on the fitted curve and fitted again. With
 * known σ per point the residuals are drawn in units of it.
 * @param options those of the fit; `seed` fixes the draws
 * @returns a refusal for a fit that carries no interval, or when more than a tenth of the refits fail
 * @source Davison & Hinkley, Bootstrap Methods and Their Application (1997), section 7.3
 */
export function bootstrapFit(
  model: Model, data: FitData, fit: FitDone, options: FitOptions & { readonly seed: string, readonly samples: number },
): BootstrapDone | { readonly ok: false, readonly reason: 'noInterval' | 'tooManyFailed', readonly message: string } {
  const prepared = prepareData(model, data, options.settings ?? {}, fit.parameters.length)
  if (!prepared.ok || fit.noInterval) return { ok: false, reason: 'noInterval', message: 'Only a fit that states an interval can be resampled.' }
  const { x, used, sigma, settings } = prepared
  const values: Record<string, number> = { ...fit.fixed, ...Object.fromEntries(fit.parameters.map(p => [p.name, p.value])) }
  const units = used.map((_, i) => sigma ? sigma[i]! : 1)
  const residuals = modifiedResiduals(model, fit, { x, units, settings, values, used })
  const random = createRandom(options.seed)
  const found: number[][] = fit.parameters.map(() => [])
  // What the fit held, whoever decided it: a refit must not let it go.
  const held = Object.keys(fit.fixed).length > 0 ? { fixed: fit.fixed } : {}
  let failed = 0
  for (let k = 0; k < options.samples; k++) {
    const y = used.map((point, i) => fit.fitted[point]! + units[i]! * residuals[Math.floor(random.uniform() * residuals.length)]!)
    const again = fitModel(model, { x, y, sigma }, { ...options, ...held, start: values, secondOpinion: false })
    if (again.ok && again.converged) again.parameters.forEach((p, j) => found[j]!.push(p.value))
    else failed++
  }
  if (failed > LARGEST_FAILED * options.samples) return { ok: false, reason: 'tooManyFailed', message: `${failed} of ${options.samples} refits failed.` }
  return { ok: true, intervals: found.map((list, j) => ({ name: fit.parameters[j]!.name, ...summarise(list, fit.level) })), samples: options.samples, failed }
}

interface Used {
  readonly x: readonly number[]
  readonly units: readonly number[]
  readonly settings: Readonly<Record<string, number>>
  readonly values: Readonly<Record<string, number>>
  readonly used: readonly number[]
}

/** Residuals of equal variance and mean zero, in units of σ. */
function modifiedResiduals(model: Model, fit: FitDone, { x, units, settings, values, used }: Used): number[] {
  const n = x.length
  const names = fit.parameters.map(p => p.name)
  const jacobian = new Float64Array(n * names.length)
  x.forEach((at, i) => {
    const gradient = model.jacobian(at, values, settings)
    names.forEach((name, c) => { jacobian[c * n + i] = gradient[name]! / units[i]! })
  })
  const { leverage } = informationOf(jacobian, n, names.map(() => false))
  const raw = used.map((point, i) => fit.residuals[point]! / units[i]! / Math.sqrt(Math.max(1e-12, 1 - leverage![i]!)))
  const mean = raw.reduce((sum, e) => sum + e, 0) / n
  return raw.map(e => e - mean)
}

function summarise(list: number[], level: number): { low: number, high: number, sd: number } {
  const sorted = [...list].sort((a, b) => a - b)
  const at = (p: number) => {
    const position = p * (sorted.length - 1)
    const below = Math.floor(position)
    const above = Math.min(below + 1, sorted.length - 1)
    return sorted[below]! + (position - below) * (sorted[above]! - sorted[below]!)
  }
  const mean = sorted.reduce((sum, v) => sum + v, 0) / sorted.length
  const sd = Math.sqrt(sorted.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (sorted.length - 1))
  return { low: at((1 - level) / 2), high: at((1 + level) / 2), sd }
}
