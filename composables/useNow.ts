const TICK_ms = 60_000

/** The time as the page was made, the same on server and browser; once the page stands it follows the clock, minute by minute. */
export function useNow() {
  const madeAt = useState<number>('made-at', () => Date.now())
  const now = ref(madeAt.value)
  const isLocal = ref(false)
  let timer: ReturnType<typeof setInterval> | undefined
  onMounted(() => {
    now.value = Date.now()
    isLocal.value = true
    timer = setInterval(() => { now.value = Date.now() }, TICK_ms)
  })
  onBeforeUnmount(() => clearInterval(timer))
  return { now, isLocal }
}
