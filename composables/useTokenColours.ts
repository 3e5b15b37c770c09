/**
 * Colours of the tokens as the page paints them now, for canvases, which cannot read CSS variables. Tokens are light-dark() pairs: only a painted
 * element knows which half holds. `painted` counts up when the theme changes and is 0 until the page stands.
 */
export function useTokenColours() {
  const { theme } = useTheme()
  const painted = ref(0)
  let scheme: MediaQueryList | undefined
  const again = (): void => { painted.value++ }
  onMounted(() => {
    again()
    scheme = window.matchMedia('(prefers-color-scheme: dark)')
    scheme.addEventListener('change', again)
  })
  onBeforeUnmount(() => scheme?.removeEventListener('change', again))
  // The attribute on <html> follows the choice a tick later.
  watch(theme, () => { setTimeout(again) })

  function colourOf(token: string): string {
    const probe = document.createElement('span')
    probe.style.color = `var(--${token})`
    document.body.append(probe)
    const colour = getComputedStyle(probe).color
    probe.remove()
    return colour
  }
  return { painted, colourOf }
}
