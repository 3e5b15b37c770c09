import { FetchError } from 'ofetch'
import type { StructureDto } from '#shared/schemas/structure'
import { readFailure } from '~/composables/useCommand'

const PAUSE_MS = 350

/** Reads a structure while its SMILES is typed: drawing and proposals, or what is wrong with it. Late answers to older texts are dropped. */
export function useStructure(smiles: () => string, found: (structure: StructureDto) => void) {
  const session = useSessionStore()
  const structure = shallowRef<StructureDto | null>(null)
  const problem = ref<string | null>(null)
  const isReading = ref(false)
  let timer: ReturnType<typeof setTimeout> | undefined

  async function read(text: string): Promise<void> {
    isReading.value = true
    try {
      const answer = await $fetch<StructureDto>(`/api/programmes/${session.programmeCode}/structure`, { query: { smiles: text } })
      if (text !== smiles().trim()) return
      structure.value = answer
      problem.value = null
      found(answer)
    }
    catch (error) {
      if (!(error instanceof FetchError)) throw error
      if (text !== smiles().trim()) return
      const { message, accepted } = readFailure(error)
      structure.value = null
      problem.value = accepted ? `${message} Accepted: ${accepted}.` : message
    }
    finally {
      if (text === smiles().trim()) isReading.value = false
    }
  }
  watch(smiles, (next) => {
    clearTimeout(timer)
    const text = next.trim()
    problem.value = null
    isReading.value = text !== ''
    if (text === '') structure.value = null
    else timer = setTimeout(() => { void read(text) }, PAUSE_MS)
  })
  onMounted(() => { if (smiles().trim()) void read(smiles().trim()) })
  onBeforeUnmount(() => clearTimeout(timer))
  return { structure, problem, isReading }
}
