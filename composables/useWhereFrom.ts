import type { ShallowRef } from 'vue'
import type { TraceDto } from '#shared/schemas/trace'

export interface WhereFromAsked { evidenceId: string, anchor: HTMLElement }
export type WhereFromLoader = (evidenceId: string) => Promise<TraceDto>
interface WhereFromState { asked: ShallowRef<WhereFromAsked | null>, loader: ShallowRef<WhereFromLoader | null> }

/**
 * "Where from?" for every number on a page. One popover per page answers (WhereFromHost, in the layout); a plugin or page says once
 * with `answerBy` how a chain is read. A number asks with `ask`.
 */
export function useWhereFrom() {
  const nuxtApp = useNuxtApp() as { _whereFrom?: WhereFromState }
  nuxtApp._whereFrom ??= { asked: shallowRef(null), loader: shallowRef(null) }
  const { asked, loader } = nuxtApp._whereFrom
  return {
    asked: readonly(asked) as Readonly<ShallowRef<WhereFromAsked | null>>,
    loader,
    ask: (evidenceId: string, anchor: HTMLElement) => { asked.value = { evidenceId, anchor } },
    close: () => { asked.value = null },
    answerBy: (load: WhereFromLoader) => { loader.value = load },
  }
}
