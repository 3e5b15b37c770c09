import type { TableRecord } from './records'

interface Grouping { mark: RegExp, certain: RegExp, possible: RegExp, against: RegExp }

const SIGN = '[-+\\u2212]?'
const grouping = (group: string, decimal: string): Grouping => ({
  mark: new RegExp(group, 'g'),
  // Two groups, or a group and the other mark behind it: no decimal mark can stand so.
  certain: new RegExp(`^${SIGN}[1-9]\\d{0,2}(?:(?:${group}\\d{3})+${decimal}\\d+|(?:${group}\\d{3}){2,})$`),
  possible: new RegExp(`^${SIGN}[1-9]\\d{0,2}(?:${group}\\d{3})+(?:${decimal}\\d*)?$`),
  against: new RegExp(`^${SIGN}(?:\\d*${group}(?:\\d{1,2}|\\d{4,})|\\d{4,}${group}\\d+|0?${group}\\d+)$`),
})
const GROUPINGS: readonly Grouping[] = [grouping(',', '\\.'), grouping('\\.', ',')]

/**
 * Takes commas or points that part thousands out of the columns that use them so without doubt: some cell there has two groups or both marks
 * ('1,234.5', '1.234.567'), and none has a group that cannot be thousands ('12,5'). '1,234' alone proves nothing and stays as it is.
 */
export function withoutGroups(records: readonly TableRecord[]): readonly TableRecord[] {
  const width = records.reduce((most, record) => Math.max(most, record.cells.length), 0)
  const used = Array.from({ length: width }, (_, index) => groupingOf(records, index))
  if (used.every(one => one === null)) return records
  return records.map(record => ({ ...record, cells: record.cells.map((cell, index) => plain(cell, used[index] ?? null)) }))
}

function groupingOf(records: readonly TableRecord[], index: number): Grouping | null {
  return GROUPINGS.find((candidate) => {
    let isCertain = false
    for (const { cells } of records) {
      const cell = cells[index] ?? ''
      if (cell.length < 3 || cell.length > 40) continue
      if (candidate.against.test(cell)) return false
      isCertain ||= candidate.certain.test(cell)
    }
    return isCertain
  }) ?? null
}

const plain = (cell: string, used: Grouping | null): string => used !== null && cell.length <= 40 && used.possible.test(cell) ? cell.replace(used.mark, '') : cell
