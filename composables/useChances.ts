import { drawChances } from '#shared/science/placement/draws'

/** How long a profile must stand still before its chances are drawn, ms. */
const STILL_ms = 350

/** Draws the chances of every agent on the map once the profile stands still; until then those shown are marked as old. Browser only. */
export function useChances() {
  const map = useMapStore()
  const profile = useProfileStore()
  let timer: ReturnType<typeof setTimeout> | undefined

  function draw(): void {
    const options = { includeUnsigned: map.includesUnsigned, cache: map.cache(), seed: map.seed }
    map.chances = new Map(drawChances(map.evidence, profile.usable, options).map(one => [one.complexId, one]))
    map.areChancesOld = false
  }
  function later(): void {
    map.areChancesOld = true
    clearTimeout(timer)
    timer = setTimeout(draw, STILL_ms)
  }
  onMounted(() => {
    later()
    watch(() => [map.evidence, profile.usable, map.includesUnsigned], later)
  })
  onBeforeUnmount(() => clearTimeout(timer))
}
