/** A cell's value as text: numbers in the shortest form that reads back to the same double, days as 2026-11-30, truth values as TRUE and FALSE. */
export function cellText(value: unknown, { isError, isPercent }: { isError: string | null, isPercent: boolean }): { text: string, isNumber: boolean } {
  if (isError !== null) return { text: isError, isNumber: false }
  if (value === null || value === undefined) return { text: '', isNumber: false }
  if (typeof value === 'number') {
    if (!isPercent) return { text: String(value), isNumber: true }
    // 0.015 shown as 1.5 %: the digits that the multiplication leaves behind are not the sheet's.
    return { text: `${Number((value * 100).toPrecision(15))} %`, isNumber: true }
  }
  if (value instanceof Date) return { text: dateText(value), isNumber: false }
  if (typeof value === 'boolean') return { text: value ? 'TRUE' : 'FALSE', isNumber: false }
  return { text: String(value), isNumber: false }
}

function dateText(date: Date): string {
  if (Number.isNaN(date.getTime())) return '#DATE!'
  const text = date.toISOString()
  return text.endsWith('T00:00:00.000Z') ? text.slice(0, 10) : text.slice(0, 16)
}
