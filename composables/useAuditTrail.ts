import type { AuditRow, AuditVerdict } from '#shared/schemas/people'

interface AuditPage { links: AuditRow[], more: boolean }

/** A chain page by page, newest first, and the walk along all of it. `path`: of the chain's route. */
export async function useAuditTrail(path: string) {
  const request = useRequestFetch()
  const { data, status, error, refresh } = await useFetch<AuditPage>(path)
  const state = useTableState(status, data)
  const isReading = ref(false)
  const verdict = ref<AuditVerdict | null>(null)
  async function readMore(): Promise<void> {
    const page = data.value
    if (!page) return
    isReading.value = true
    try {
      const next = await request<AuditPage>(path, { query: { before: page.links.at(-1)?.seq } })
      data.value = { links: [...page.links, ...next.links], more: next.more }
    }
    finally {
      isReading.value = false
    }
  }
  async function verify(): Promise<void> {
    isReading.value = true
    try {
      verdict.value = await request<AuditVerdict>(`${path}/verdict`)
    }
    finally {
      isReading.value = false
    }
  }
  return { links: computed(() => data.value?.links ?? []), more: computed(() => data.value?.more ?? false), state, error, refresh, isReading, verdict, readMore, verify }
}
