import type { AsyncDataRequestStatus } from '#app'

/** What a table shows while its rows are fetched: rows that stand stay while they are read again. */
export function useTableState(status: Ref<AsyncDataRequestStatus>, data: Ref<unknown>): ComputedRef<'ready' | 'loading' | 'failed'> {
  return computed(() => status.value === 'error' ? 'failed' : data.value === undefined || data.value === null ? 'loading' : 'ready')
}
