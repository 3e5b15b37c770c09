import type { ShallowRef } from 'vue'

/** A single key that does something on this screen. `key` as in KeyboardEvent.key; letters without regard to case. */
export interface KeyBinding { key: string, words: string, run: (event: KeyboardEvent) => void, group?: string, enabled?: () => boolean }

/** Boxes in which a letter is text or already has a meaning of its own. */
const TYPING = 'input, textarea, select, [contenteditable=""], [contenteditable="true"], [role="textbox"], [role="combobox"], [role="listbox"], [role="menu"], [role="dialog"], [role="alertdialog"]'

/** Whether a key press belongs to what has the focus rather than to the screen. */
export function isTyping(target: EventTarget | null): boolean {
  return target instanceof Element && target.closest(TYPING) !== null
}

export function keyMatches(binding: KeyBinding, event: KeyboardEvent): boolean {
  if (event.ctrlKey || event.metaKey || event.altKey || event.isComposing || event.defaultPrevented) return false
  return binding.key.length === 1 ? event.key.toLowerCase() === binding.key.toLowerCase() : event.key === binding.key
}

/** Whether single keys are on, kept for a year (WCAG 2.1.4: they can be switched off). */
export function useKeySwitch() {
  const kept = useLastingChoice('lanthorn-keys')
  return computed<boolean>({ get: () => kept.value !== 'off', set: (on) => { kept.value = on ? 'on' : 'off' } })
}

/** Every binding alive now, in the order of the screens that registered them; KeyList shows it. */
export function useKeyRegistry() {
  const nuxtApp = useNuxtApp() as { _keyRegistry?: ShallowRef<readonly KeyBinding[]> }
  nuxtApp._keyRegistry ??= shallowRef<readonly KeyBinding[]>([])
  return nuxtApp._keyRegistry
}

/**
 * Registers single-key shortcuts while the calling component lives. The first enabled binding of a key, latest registered first, wins;
 * none runs while a person types, holds Ctrl, Alt or Meta, or has switched single keys off.
 */
export function useKeys(bindings: readonly KeyBinding[]) {
  const registry = useKeyRegistry()
  const isOn = useKeySwitch()
  function press(event: KeyboardEvent): void {
    if (!isOn.value || isTyping(event.target)) return
    const own = bindings.find(binding => keyMatches(binding, event) && (binding.enabled?.() ?? true))
    if (!own || registry.value.findLast(one => keyMatches(one, event) && (one.enabled?.() ?? true)) !== own) return
    event.preventDefault()
    own.run(event)
  }
  onMounted(() => {
    registry.value = [...registry.value, ...bindings]
    window.addEventListener('keydown', press)
  })
  onBeforeUnmount(() => {
    registry.value = registry.value.filter(one => !bindings.includes(one))
    window.removeEventListener('keydown', press)
  })
  return { isOn }
}
