import type { TraceDto } from '#shared/schemas/trace'

/** Says once how a number's chain is read, for the popover that every number with evidence opens. */
export default defineNuxtPlugin(() => {
  const session = useSessionStore()
  useWhereFrom().answerBy(evidenceId => $fetch<TraceDto>(`/api/programmes/${session.programmeCode}/trace/${evidenceId}`))
})
