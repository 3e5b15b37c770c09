export type Theme = 'system' | 'light' | 'dark'
export const THEMES: readonly Theme[] = ['system', 'light', 'dark']
const YEAR_s = 60 * 60 * 24 * 365

/**
 * What a person has chosen about the look. Kept in cookies, so that the server draws the first page in the right theme and nothing flashes.
 * mechanismWords: T1, T2 or CEST written after each name, for eyes that cannot rest on colour.
 */
export function useTheme() {
  const options = { maxAge: YEAR_s, sameSite: 'lax', path: '/' } as const
  const themeCookie = useCookie<Theme>('lanthorn-theme', { ...options, default: () => 'system' })
  const wordsCookie = useCookie<'on' | 'off'>('lanthorn-words', { ...options, default: () => 'off' })
  const theme = computed<Theme>({
    get: () => THEMES.includes(themeCookie.value) ? themeCookie.value : 'system',
    set: (next) => { themeCookie.value = next },
  })
  const mechanismWords = computed<boolean>({
    get: () => wordsCookie.value === 'on',
    set: (on) => { wordsCookie.value = on ? 'on' : 'off' },
  })
  return { theme, mechanismWords }
}
