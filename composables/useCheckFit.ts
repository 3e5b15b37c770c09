import type { CompareDto, FitRequest } from '#shared/schemas/fit'
import type { CheckedSubject } from '~/composables/useCheckSubject'

/**
 * What a physicist does with a fit while checking: a tube is looked at, points and tubes are picked to be left out, the next version is asked for, followed,
 * and laid beside the one it came from.
 */
export function useCheckFit(subject: Ref<CheckedSubject | null | undefined>) {
  const session = useSessionStore()
  const route = useRoute()
  const chosen = ref<number | null>(null)
  const places = ref<FitRequest['putBack']>([])
  const own = computed(() => subject.value?.kind === 'fit' ? subject.value : null)
  const commands = useSeriesCommands(own.value?.series.id ?? '', { reread: async () => undefined })
  const mayFit = computed(() => own.value !== null && session.may('fit.request') && !own.value.series.isWithdrawn && !own.value.series.replacedBy)
  const tubes = computed(() => own.value?.fit.tubes ?? [])
  const progress = useFollowProgress(() => own.value?.series.id ?? '', () => void arrive())

  /** A fit of this series ended: where this person asked for it, its check opens with the old version beside it. */
  async function arrive(): Promise<void> {
    if (!own.value) return
    const { series, fit } = own.value
    const { versions } = await $fetch<{ versions: { id: string, versionNo: number }[] }>(`/api/programmes/${session.programmeCode}/series/${series.id}`)
    const newest = versions[0]
    if (newest && newest.versionNo > fit.versionNo && asked.value) await navigateTo({ path: `/${session.programmeCode}/checks/fit/${newest.id}`, query: { beside: fit.versionNo } })
  }
  const asked = ref(false)
  async function request(body: Partial<FitRequest>): Promise<void> {
    asked.value = await commands.requestFit(body)
    if (asked.value) places.value = []
  }
  async function requestAll(bodies: Partial<FitRequest>[]): Promise<void> {
    asked.value = await commands.requestFits(bodies)
  }
  const isOut = (place: FitRequest['putBack'][number]): boolean => own.value?.fit.exclusions.some(one => one.tubeNo === place.tubeNo && one.pointIndex === place.pointIndex) ?? false
  function toggle(place: FitRequest['putBack'][number]): void {
    if (!mayFit.value || isOut(place)) return
    const same = (one: typeof place): boolean => one.tubeNo === place.tubeNo && one.pointIndex === place.pointIndex
    places.value = places.value.some(same) ? places.value.filter(one => !same(one)) : [...places.value, place]
  }
  /** The tube so many places on; around the ends. */
  function step(by: 1 | -1): void {
    const all = tubes.value
    if (all.length === 0) return
    const at = all.findIndex(one => one.tubeNo === chosen.value)
    chosen.value = all[(at < 0 ? (by > 0 ? 0 : all.length - 1) : at + by + all.length) % all.length]!.tubeNo
  }
  function nextFlagged(): void {
    const at = tubes.value.findIndex(one => one.tubeNo === chosen.value)
    const order = [...tubes.value.slice(at + 1), ...tubes.value.slice(0, at + 1)]
    const bySeries = new Set(own.value?.fit.flags.map(flag => flag.tubeNo) ?? [])
    chosen.value = order.find(one => one.flags.length > 0 || bySeries.has(one.tubeNo))?.tubeNo ?? chosen.value
  }
  /** Beside the version it came from, or the one before; again closes. */
  async function compare(): Promise<void> {
    if (!own.value) return
    const { fit, series } = own.value
    const other = Number(route.query.beside) || fit.parentVersion || series.versions.find(one => one.versionNo < fit.versionNo)?.versionNo || series.versions.find(one => one.versionNo !== fit.versionNo)?.versionNo
    if (commands.compared.value) commands.compared.value = null
    else if (other) await commands.compare([Math.min(other, fit.versionNo), Math.max(other, fit.versionNo)])
  }
  const compared: Ref<CompareDto | null> = commands.compared
  onMounted(() => { if (Number(route.query.beside) > 0 && own.value) void compare() })
  return { chosen, places, mayFit, request, requestAll, toggle, step, nextFlagged, compare, compared, job: computed(() => own.value ? progress.jobOf(own.value.series.id) : null), isFitting: commands.fitting.isPending, fitError: commands.fitError, fitFieldError: commands.fitFieldError }
}
