import { getCoreRowModel, getSortedRowModel, useVueTable, type ColumnDef, type SortingState } from '@tanstack/vue-table'
import { NOT_MEASURED, columnDecimals, formatFixed, formatNumber } from '#shared/format'

/** A column as a page declares it. number: right-aligned by equal decimals. pair: value and ± in two cells under one head. */
export interface DataColumn<Row> {
  key: string
  label: string
  /** Second line of the head; for kind text a condition. */
  unit?: string
  kind?: 'text' | 'number' | 'pair'
  value: (row: Row) => string | number | null
  /** Standard error, for pairs. */
  se?: (row: Row) => number | null
  /** Fixed decimals; left out: as the errors in the column ask. */
  decimals?: number
  sortable?: boolean
  /** Words for null. */
  absent?: string
  /** Cannot apply: a hatched cell without words. */
  barred?: (row: Row) => boolean
}
export interface TableSort { key: string, descending: boolean }
export interface WrittenCell { text: string, plusMinus: string | null, isAbsent: boolean, isBarred: boolean }

/** Sorting and writing of a table's rows. Null sorts last in either direction: what is not known is neither least nor most. */
export function useDataTable<Row>(options: { rows: () => readonly Row[], columns: () => readonly DataColumn<Row>[], sort: () => TableSort | null, rowKey: (row: Row) => string }) {
  const sorting = ref<SortingState>(toState(options.sort()))
  watch(options.sort, (next) => { sorting.value = toState(next) })
  const definitions = computed<ColumnDef<Row, unknown>[]>(() => options.columns().map(column => ({
    id: column.key,
    accessorFn: row => column.value(row) ?? undefined,
    enableSorting: column.sortable !== false,
    sortDescFirst: false,
    sortUndefined: 'last' as const,
    sortingFn: column.kind === 'number' || column.kind === 'pair' ? 'basic' as const : 'alphanumeric' as const,
  })))
  const table = useVueTable<Row>({
    get data() { return options.rows() as Row[] },
    get columns() { return definitions.value },
    state: { get sorting() { return sorting.value } },
    enableSortingRemoval: false,
    getRowId: row => options.rowKey(row),
    onSortingChange: (update) => { sorting.value = typeof update === 'function' ? update(sorting.value) : update },
    getCoreRowModel: getCoreRowModel(),
    getSortedRowModel: getSortedRowModel(),
  })
  const decimals = computed(() => new Map(options.columns().map(column => [column.key, column.decimals ?? decimalsOf(column, options.rows())])))
  const sorted = computed<TableSort | null>(() => sorting.value[0] ? { key: sorting.value[0].id, descending: sorting.value[0].desc } : null)

  return {
    rows: computed(() => table.getRowModel().rows.map(row => row.original)),
    sorted,
    toggleSort: (key: string) => table.getColumn(key)?.toggleSorting(),
    ariaSort: (column: DataColumn<Row>) => column.sortable === false ? undefined : sorted.value?.key !== column.key ? 'none' as const : sorted.value.descending ? 'descending' as const : 'ascending' as const,
    write: (column: DataColumn<Row>, row: Row) => writeCell(column, row, decimals.value.get(column.key) ?? null),
  }
}

const toState = (sort: TableSort | null): SortingState => sort ? [{ id: sort.key, desc: sort.descending }] : []

/** Largest over smallest value up to which one count of decimals serves a column. */
const WIDEST_WITH_ERRORS = 1e5
const WIDEST_WITHOUT = 1e3

/** Null when the column spans so many powers of ten that equal decimals would hide or invent digits. */
function decimalsOf<Row>(column: DataColumn<Row>, rows: readonly Row[]): number | null {
  if (column.kind !== 'number' && column.kind !== 'pair') return null
  const cells = rows.map(row => ({ value: asNumber(column.value(row)), se: column.se?.(row) ?? null }))
  const sizes = cells.flatMap(({ value }) => value ? [Math.abs(value)] : [])
  const span = column.se ? WIDEST_WITH_ERRORS : WIDEST_WITHOUT
  const isWide = sizes.length > 0 && (Math.max(...sizes) / Math.min(...sizes) > span || Math.min(...sizes) < 1e-4)
  return isWide ? null : columnDecimals(cells)
}

function asNumber(value: string | number | null): number | null {
  return typeof value === 'number' && Number.isFinite(value) ? value : null
}

function writeCell<Row>(column: DataColumn<Row>, row: Row, decimals: number | null): WrittenCell {
  if (column.barred?.(row)) return { text: '', plusMinus: null, isAbsent: true, isBarred: true }
  const value = column.value(row)
  if (value === null || value === '' || (typeof value === 'number' && !Number.isFinite(value))) return { text: column.absent ?? NOT_MEASURED, plusMinus: null, isAbsent: true, isBarred: false }
  if (typeof value === 'string') return { text: value, plusMinus: null, isAbsent: false, isBarred: false }
  const write = (one: number): string => decimals === null ? formatNumber(one) : formatFixed(one, decimals)
  const se = column.se?.(row) ?? null
  return { text: write(value), plusMinus: se === null ? null : `±\u00A0${write(se)}`, isAbsent: false, isBarred: false }
}
