export interface ValueDifference { path: string, stored: string, repeated: string }

/**
 * Where two JSON values differ, by path. relativeDifference: the largest |a − b| / max(|a|, |b|) of differing numbers; 0 when nothing differs, null where
 * something other than a number does, for then no figure says how far apart they are.
 */
export function compareValues(stored: unknown, repeated: unknown): { differences: ValueDifference[], relativeDifference: number | null } {
  const differences: ValueDifference[] = []
  const found = { relative: 0, beyondNumbers: false }
  walk(stored, repeated, '$')
  return { differences, relativeDifference: found.beyondNumbers ? null : found.relative }

  function walk(a: unknown, b: unknown, path: string): void {
    if (Object.is(a, b)) return
    if (isBranch(a) && isBranch(b) && Array.isArray(a) === Array.isArray(b)) {
      for (const key of new Set([...Object.keys(a), ...Object.keys(b)])) walk(a[key], b[key], Array.isArray(a) ? `${path}[${key}]` : `${path}.${key}`)
      return
    }
    differences.push({ path, stored: short(a), repeated: short(b) })
    if (typeof a === 'number' && typeof b === 'number') found.relative = Math.max(found.relative, Math.abs(a - b) / (Math.max(Math.abs(a), Math.abs(b)) || 1))
    else found.beyondNumbers = true
  }
}

const isBranch = (value: unknown): value is Record<string, unknown> => typeof value === 'object' && value !== null

function short(value: unknown): string {
  const text = value === undefined ? 'nothing' : JSON.stringify(value)
  return text.length > 80 ? `${text.slice(0, 77)}...` : text
}
