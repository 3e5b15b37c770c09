import type { Preferences } from '#shared/schemas/session'

/** What a person chose about the look and the keys: in cookies here, so that the first paint is right, and with the account, so that it follows them. */
export function usePreferences() {
  const { theme, mechanismWords } = useTheme()
  const singleKeys = useKeySwitch()
  const preferences = computed<Preferences>(() => ({ theme: theme.value, singleKeys: singleKeys.value, mechanismWords: mechanismWords.value }))
  function apply(chosen: Preferences): void {
    theme.value = chosen.theme
    mechanismWords.value = chosen.mechanismWords
    singleKeys.value = chosen.singleKeys
  }
  return { preferences, apply }
}
