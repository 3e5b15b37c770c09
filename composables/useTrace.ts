import { FetchError } from 'ofetch'
import type { TraceDto } from '#shared/schemas/trace'

/** Connects every number of the product with the chain behind it: the layout calls it once. */
export function useTrace(): void {
  const session = useSessionStore()
  useWhereFrom().answerBy(async (evidenceId) => {
    try {
      return await $fetch<TraceDto>(`/api/programmes/${session.programmeCode}/trace/${evidenceId}`)
    }
    catch (error) {
      if (error instanceof FetchError && typeof error.data?.message === 'string') throw new Error(error.data.message, { cause: error })
      throw error
    }
  })
}
