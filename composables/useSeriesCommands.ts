import type { CompareDto, FitRequest, FitRequested, RepeatDto } from '#shared/schemas/fit'
import type { CorrectRequest, SeriesDto } from '#shared/schemas/series'

/** What a person can have done to one series, each with its own answer and failure. `reread` runs after whatever changed it. */
export function useSeriesCommands(seriesId: string, { reread }: { reread: () => Promise<unknown> }) {
  const session = useSessionStore()
  const { say } = useToast()
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
    compared.value = await $fetch<CompareDto>(`${url}/compare`, { query: { versions: pair.join(',') } })
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
  return { requestFit, submit, repeat, compare, correct, withdraw, repeated, compared, fitting, checking, repeating, correcting, withdrawing }
}
