export type Theme = 'system' | 'light' | 'dark'
const THEMES: readonly string[] = ['system', 'light', 'dark'] satisfies Theme[]
const isTheme = (text: string | null): text is Theme => text !== null && THEMES.includes(text)

/**
 * What a person has chosen about the look. The server draws the first page in the right theme, so nothing flashes.
 * mechanismWords: T1, T2 or CEST written after each name, for eyes that cannot rest on colour.
 */
export function useTheme() {
  const kept = useLastingChoice('lanthorn-theme')
  const keptWords = useLastingChoice('lanthorn-words')
  const theme = computed<Theme>({
    get: () => isTheme(kept.value) ? kept.value : 'system',
    set: (next) => { kept.value = next },
  })
  const mechanismWords = computed<boolean>({
    get: () => keptWords.value === 'on',
    set: (on) => { keptWords.value = on ? 'on' : 'off' },
  })
  return { theme, mechanismWords }
}
