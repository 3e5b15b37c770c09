import type { CheckDto } from '#shared/schemas/check'

export type CheckStepName = 'submit' | 'sign' | 'return' | 'recall' | 'withdraw'

const DONE: Record<CheckStepName, string> = { submit: 'is sent for checking', sign: 'is signed', return: 'is returned', recall: 'is taken back', withdraw: 'is no longer signed' }

/** Steps of one check. Each names the step it answers, so that whoever comes second meets who was first and when. */
export function useCheckSteps(check: Ref<CheckDto | null | undefined>, reread: () => Promise<unknown>) {
  const session = useSessionStore()
  const { say } = useToast()
  const command = useCommand()
  /** The dialog that is open. */
  const asked = ref<CheckStepName | null>(null)
  const conflict = computed(() => {
    const { failure } = command
    return failure.value?.code === 'conflict' ? { message: failure.value.message, at: typeof failure.value.data.at === 'string' ? failure.value.data.at : null, personName: typeof failure.value.data.personName === 'string' ? failure.value.data.personName : null } : null
  })
  const conflictOpen = ref(false)

  function ask(step: CheckStepName): void {
    command.clear()
    asked.value = step
  }
  async function take(comment: string): Promise<boolean> {
    const step = asked.value
    const now = check.value
    if (!step || !now) return false
    const answer = await command.send<{ state: CheckDto['state'] }>(`/api/programmes/${session.programmeCode}/checks/${now.kind}/${now.id}/${step}`, { body: { expectedSeq: now.seq, comment } })
    if (!answer.ok && answer.failure.code !== 'conflict') return false
    asked.value = null
    conflictOpen.value = !answer.ok
    if (answer.ok) say(`${now.agentCode ?? now.title}, version ${now.versionNo}, ${answer.value.state === 'firstSigned' ? 'is signed once and waits for a second signature' : DONE[step]}.`)
    await reread()
    return answer.ok
  }
  return { asked, ask, take, conflict, conflictOpen, isPending: command.isPending, error: computed(() => command.errorBeside()) }
}
