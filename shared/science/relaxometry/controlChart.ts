/** Sessions from which centre and spread are taken, and the fewest that give them. */
export const BASE_SESSIONS = 20
export const LEAST_BASE = 5
/** Standard deviations from the centre beyond which a session is outside. */
export const WARNING_SD = 2

export interface JudgedSession {
  readonly value: number
  /** One of those that centre and spread rest on. */
  readonly isBase: boolean
  /** Distance from the centre in SD; for a base session from the centre and spread of the others. Null while there are too few. */
  readonly z: number | null
  readonly isOutside: boolean
}

export interface ControlChart {
  readonly centre: number | null
  /** SD of the base sessions, n − 1 in the denominator. */
  readonly sd: number | null
  readonly baseCount: number
  readonly sessions: readonly JudgedSession[]
}

/**
 * Control chart of single values: centre and SD from the first sessions since the tube was named, every session held against them. A base session is judged
 * without itself, or a single bad one would hide in the spread that it makes.
 * @param values in order of time
 * @source Shewhart's chart for individual values, ISO 7870-2:2013; warning limits at 2 SD; from memory
 */
export function controlChart(values: readonly number[]): ControlChart {
  const base = values.slice(0, BASE_SESSIONS)
  const all = spread(base)
  const sessions = values.map((value, i): JudgedSession => {
    const isBase = i < BASE_SESSIONS
    const against = isBase ? spread(base.filter((_, k) => k !== i)) : all
    const z = against === null || !(against.sd > 0) ? null : (value - against.mean) / against.sd
    return { value, isBase, z, isOutside: z !== null && Math.abs(z) > WARNING_SD }
  })
  return { centre: all?.mean ?? null, sd: all?.sd ?? null, baseCount: base.length, sessions }
}

function spread(values: readonly number[]): { mean: number, sd: number } | null {
  const n = values.length
  if (n < LEAST_BASE) return null
  const mean = values.reduce((sum, value) => sum + value, 0) / n
  return { mean, sd: Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (n - 1)) }
}
