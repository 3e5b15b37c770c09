/** Seconds left of a pause that begins anew whenever `start` changes; 0 = over. Counted by the clock, so that a sleeping tab wakes up right. */
export function useCountdown(seconds: () => number, start: () => unknown) {
  const left = ref(0)
  let end_ms = 0
  let timer: ReturnType<typeof setInterval> | undefined
  function tick(): void {
    left.value = Math.max(0, Math.ceil((end_ms - Date.now()) / 1000))
    if (left.value === 0) clearInterval(timer)
  }
  watch(start, () => {
    clearInterval(timer)
    end_ms = Date.now() + seconds() * 1000
    tick()
    if (left.value > 0) timer = setInterval(tick, 250)
  })
  onBeforeUnmount(() => clearInterval(timer))
  return left
}
