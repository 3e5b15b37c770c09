/**
 * When a field speaks up: after it is left, never at the first keystroke; once it has spoken, it follows every change.
 * An error that the server found stands until the value changes.
 */
export function useFieldCheck(own: () => string | null, given: () => string | null | undefined, value: () => unknown) {
  const wasLeft = ref(false)
  const isStale = ref(false)
  watch(given, () => { isStale.value = false })
  watch(value, () => { isStale.value = true })
  const error = computed<string | null>(() => {
    const fromOutside = given()
    if (fromOutside && !isStale.value) return fromOutside
    return wasLeft.value ? own() : null
  })
  return { error, leave: () => { wasLeft.value = true } }
}
