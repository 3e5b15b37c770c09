import { FetchError } from 'ofetch'
import type { CompareDto, FitRequest, FitRequested, RepeatDto } from '#shared/schemas/fit'
import type { CorrectRequest, SeriesDto } from '#shared/schemas/series'

/** What a person can have done to one series, each with its own answer and failure. `reread` runs after whatever changed it. */
export function useSeriesCommands(seriesId: string, { reread }: { reread: () => Promise<unknown> }) {
  const session = useSessionStore()
  const { say, warn } = useToast()
  const base = `/api/programmes/${session.programmeCode}`
  const url = `${base}/series/${seriesId}`
  const [fitting, checking, repeating, correcting, withdrawing] = [useCommand(), useCommand(), useCommand(), useCommand(), useCommand()]
  const repeated = shallowRef<RepeatDto | null>(null)
  const compared = shallowRef<CompareDto | null>(null)

  async function requestFit(body: Partial<FitRequest>): Promise<boolean> {
    const answer = await fitting.send<FitRequested>(`${url}/fits`, { body })
    if (answer.ok) say('The next version is in the queue.')
    return answer.ok
  }
  /** Asks for each in turn; one that is refused does not keep the others back. @returns whether any is in the queue */
  async function requestFits(bodies: readonly Partial<FitRequest>[]): Promise<boolean> {
    const failures: string[] = []
    for (const body of bodies) {
      const answer = await fitting.send<FitRequested>(`${url}/fits`, { body })
      if (!answer.ok) failures.push(answer.failure.message)
    }
    const queued = bodies.length - failures.length
    if (queued > 0) say(queued === 1 ? 'One version is in the queue.' : `${queued} versions are in the queue.`)
    if (failures.length > 0) warn(`${failures.length} of ${bodies.length} could not be asked for: ${[...new Set(failures)].join(' ')}`)
    return queued > 0
  }
  async function submit(fitId: string, { expectedSeq, comment, versionNo }: { expectedSeq: number, comment: string, versionNo: number }): Promise<boolean> {
    const answer = await checking.send(`${base}/checks/fit/${fitId}/submit`, { body: { expectedSeq, comment } })
    if (answer.ok) say(`Version ${versionNo} is sent for checking.`)
    await reread()
    return answer.ok
  }
  async function repeat(versionNo: number): Promise<void> {
    const answer = await repeating.send<RepeatDto>(`${url}/fits/${versionNo}/repeat`)
    repeated.value = answer.ok ? answer.value : null
  }
  async function compare(pair: readonly [number, number]): Promise<void> {
    try {
      compared.value = await $fetch<CompareDto>(`${url}/compare`, { query: { versions: pair.join(',') } })
    }
    catch (error) {
      if (!(error instanceof FetchError)) throw error
      warn(`The versions could not be laid side by side: ${readFailure(error).message}`)
    }
  }
  async function correct(body: CorrectRequest): Promise<string | null> {
    const answer = await correcting.send<Pick<SeriesDto, 'id'>>(`${url}/correct`, { body })
    return answer.ok ? answer.value.id : null
  }
  async function withdraw(reason: string): Promise<boolean> {
    const answer = await withdrawing.send(`${url}/withdraw`, { body: { reason } })
    if (answer.ok) say('The series is withdrawn.')
    await reread()
    return answer.ok
  }
  /** What is wrong with an option stands at its field; everything else beside the button. */
  const isOption = (): boolean => fitting.failure.value?.field?.startsWith('options.') ?? false
  const fitFieldError = computed(() => isOption() ? { field: fitting.failure.value!.field!, message: fitting.errorFor(fitting.failure.value!.field!)! } : null)
  const fitError = computed(() => isOption() ? null : fitting.errorBeside())
  return { fitError, fitFieldError, requestFit, requestFits, submit, repeat, compare, correct, withdraw, repeated, compared, fitting, checking, repeating, correcting, withdrawing }
}
