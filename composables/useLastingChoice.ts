import { effectScope, type Ref } from 'vue'

const YEAR_s = 60 * 60 * 24 * 365
interface Choices { _choices?: Map<string, Ref<string | null>> }

/**
 * A choice of a person about the look, kept in a cookie for a year so that the server knows it with the first page. One ref for the whole
 * application, alive as long as it: a menu that changes the choice and a screen that follows it share it at once.
 */
export function useLastingChoice(name: string): Ref<string | null> {
  const nuxtApp = useNuxtApp() as Choices
  const choices = (nuxtApp._choices ??= new Map())
  const known = choices.get(name)
  if (known) return known
  const made = effectScope(true).run(() => useCookie<string | null>(name, { maxAge: YEAR_s, sameSite: 'lax', path: '/', default: () => null }))
  if (!made) throw new Error(`The cookie ${name} could not be opened.`)
  choices.set(name, made)
  return made
}
