/**
 * How many failures are free, and how the pause grows after them: first_s, doubled with every further failure, at most longest_s.
 * An address stands for a whole institute behind one router, so it may fail more often than one account.
 */
export interface PauseRule { free: number, first_s: number, longest_s: number }
export const ACCOUNT_RULE: PauseRule = { free: 5, first_s: 15, longest_s: 900 }
export const SOURCE_RULE: PauseRule = { free: 30, first_s: 15, longest_s: 900 }
/** Failures older than this are forgotten. */
export const WINDOW_s = 24 * 60 * 60

/** Pause after that many failures in a row, s; 0 while they are free. */
export function pauseAfter(failures: number, rule: PauseRule): number {
  if (failures < rule.free) return 0
  return Math.min(rule.first_s * 2 ** (failures - rule.free), rule.longest_s)
}

/** Seconds until another try is allowed, whole and rounded up; 0 = now. */
export function secondsToWait(failures: { count: number, sinceLast_s: number | null }, rule: PauseRule): number {
  if (failures.sinceLast_s === null) return 0
  return Math.max(0, Math.ceil(pauseAfter(failures.count, rule) - failures.sinceLast_s))
}
