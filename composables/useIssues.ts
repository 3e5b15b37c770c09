import type { CommandFailure } from '~/composables/useCommand'

interface Issue { field: string, message: string, accepted?: string }

const isIssue = (one: unknown): one is Issue => typeof one === 'object' && one !== null && 'field' in one && 'message' in one

/** All fields that a command was refused for, not only the first: what is wrong with each, and what would be accepted. */
export function useIssues(failure: Ref<CommandFailure | null>) {
  const issues = computed<Issue[]>(() => {
    if (!failure.value) return []
    const { data, field, message, accepted } = failure.value
    const all = Array.isArray(data.issues) ? data.issues.filter(isIssue) : []
    return all.length > 0 ? all : field ? [{ field, message, ...(accepted ? { accepted } : {}) }] : []
  })
  const words = ({ message, accepted }: Issue): string => accepted ? `${message} Accepted: ${accepted.replace(/\.$/, '')}.` : message
  return {
    issues,
    /** Words for a field, null when it is not at fault. */
    issueFor: (field: string): string | null => {
      const found = issues.value.find(one => one.field === field)
      return found ? words(found) : null
    },
    /** The failure as a whole, for beside the button: how many fields, or the sentence itself. */
    summary: computed<string | null>(() => {
      if (!failure.value) return null
      if (issues.value.length > 1) return `Nothing was stored: ${issues.value.length} fields need another look.`
      const { message, accepted } = failure.value
      return accepted ? `${message} Accepted: ${accepted.replace(/\.$/, '')}.` : message
    }),
  }
}
