import { changesOf, readMapQuery, writeMapQuery, type MapView } from '#shared/map/address'
import { MOST_SHORTLISTED, SHOWN } from '~/stores/map'

/** How long the view must stand still before the address follows, ms: a dragged number is not an address for every step. */
const STILL_ms = 250

/** The state of the page that is not in the stores. */
export interface MapSwitches { view: Ref<string>, showsEllipses: Ref<boolean>, showsFront: Ref<boolean> }

/**
 * The address holds the view: agent, shortlist, switches, and the profile with what was changed in it. A link opens it again as it was; what it names and the
 * programme no longer has is left out.
 */
export function useMapAddress({ view, showsEllipses, showsFront }: MapSwitches) {
  const [map, profile, route, router] = [useMapStore(), useProfileStore(), useRoute(), useRouter()]
  const usual = profile.versions[0]?.id ?? null

  function open(asked: MapView): void {
    const idOf = (code: string): string[] => map.agents.filter(one => one.code === code).map(one => one.complexId)
    if (asked.profileId && profile.versions.some(one => one.id === asked.profileId)) profile.open(asked.profileId)
    for (const [key, value] of Object.entries(asked.changes)) profile.change(key as keyof typeof asked.changes, value)
    map.hidden = SHOWN.filter(one => asked.hidden.includes(one))
    map.includesUnsigned = asked.includesUnsigned
    map.shortlist = asked.shortlist.flatMap(idOf).slice(0, MOST_SHORTLISTED)
    if (asked.agent) map.chosenId = idOf(asked.agent)[0] ?? map.chosenId
    view.value = asked.table ? 'table' : 'placed'
    showsEllipses.value = asked.ellipses
    showsFront.value = asked.front
  }
  const current = computed<MapView>(() => ({
    agent: map.chosen?.code ?? null, shortlist: map.shortlisted.map(one => one.code), hidden: map.hidden, table: view.value === 'table', includesUnsigned: map.includesUnsigned,
    ellipses: showsEllipses.value, front: showsFront.value, profileId: profile.baseId === usual ? null : profile.baseId, changes: changesOf(profile.draft, profile.start),
  }))
  // An address that says nothing leaves what the person had open in this visit.
  if (Object.keys(writeMapQuery(readMapQuery(route.query))).length > 0) open(readMapQuery(route.query))

  let timer: ReturnType<typeof setTimeout> | undefined
  onMounted(() => {
    watch(() => JSON.stringify(writeMapQuery(current.value)), (next) => {
      clearTimeout(timer)
      timer = setTimeout(() => { void router.replace({ query: JSON.parse(next) as Record<string, string>, hash: route.hash }) }, STILL_ms)
    })
  })
  onBeforeUnmount(() => clearTimeout(timer))
}
