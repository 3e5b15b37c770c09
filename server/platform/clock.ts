/** Domain time. Leases, expiries of locks and limits use the database's own clock instead, so that several processes agree. */
export interface Clock { now: () => Date }

export const systemClock: Clock = { now: () => new Date() }

/** A clock for tests and for loading demo data: stands where it is put. */
export function fixedClock(start: Date): Clock & { set: (to: Date) => void, advance: (ms: number) => void } {
  let at = start
  return {
    now: () => at,
    set: (to) => { at = to },
    advance: (ms) => { at = new Date(at.getTime() + ms) },
  }
}
