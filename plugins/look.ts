import regular from '@fontsource/fira-sans/files/fira-sans-latin-400-normal.woff2?url'
import semibold from '@fontsource/fira-sans/files/fira-sans-latin-600-normal.woff2?url'

/** The theme stands on <html> before the first paint, on the server's page already, and the two faces of the first screen are fetched with it. */
export default defineNuxtPlugin(() => {
  const { theme, mechanismWords } = useTheme()
  useHead({
    htmlAttrs: {
      'data-theme': () => theme.value === 'system' ? undefined : theme.value,
      'data-words': () => mechanismWords.value ? 'on' : undefined,
    },
    titleTemplate: title => title && title !== 'Lanthorn' ? `${title} · Lanthorn` : 'Lanthorn',
    link: [regular, semibold].map(href => ({ rel: 'preload', as: 'font', type: 'font/woff2', href, crossorigin: '' as const })),
  })
})
