import { defineStore } from 'pinia'
import type { QueueItemDto } from '#shared/schemas/check'

/** The queue of checks, as long as the checks page stands: read once, and again after every step. */
export const useCheckStore = defineStore('check', () => {
  const session = useSessionStore()
  const queue = shallowRef<readonly QueueItemDto[]>([])

  async function load(): Promise<void> {
    queue.value = session.may('check.queue') ? await useRequestFetch()<QueueItemDto[]>(`/api/programmes/${session.programmeCode}/checks`) : []
  }
  /** Queue and count in the frame after a step. */
  async function reread(): Promise<void> {
    await Promise.all([load(), session.load(session.programmeCode ? { programme: session.programmeCode } : {})])
  }
  const pathOf = (item: Pick<QueueItemDto, 'kind' | 'id'>): string => `/${session.programmeCode}/checks/${item.kind}/${item.id}`

  /** The item so many places on from the chain looked at; the first one where the chain stands no longer in the queue; null at the ends. */
  function neighbour(chainId: string | null, step: 1 | -1): QueueItemDto | null {
    const at = queue.value.findIndex(item => item.chainId === chainId)
    return (at < 0 ? queue.value[0] : queue.value[at + step]) ?? null
  }
  return { queue, load, reread, pathOf, neighbour }
})
