import AxeBuilder from '@axe-core/playwright'
import type { Page } from 'playwright-core'

const RULES = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa']

/** What axe finds against WCAG 2.2 AA, one line each with the place. */
export async function accessibilityFaults(page: Page): Promise<string[]> {
  const { violations } = await new AxeBuilder({ page }).withTags(RULES).analyze()
  return violations.flatMap(({ id, help, nodes }) => nodes.slice(0, 3).map(node => `${id} (${help}): ${node.target.join(' ')} ${node.html.slice(0, 160)} ${node.any[0]?.message ?? ''}`))
}

/** Parts that make the page wider than its window: what a phone would have to be pushed sideways for. */
export async function overflowFaults(page: Page): Promise<string[]> {
  return await page.evaluate(() => {
    const width = document.documentElement.clientWidth
    if (document.documentElement.scrollWidth <= width) return []
    const isClipped = (one: Element): boolean => {
      for (let up = one.parentElement; up; up = up.parentElement) if (getComputedStyle(up).overflowX !== 'visible') return true
      return false
    }
    const wide = [...document.querySelectorAll('body *')].filter(one => one.getBoundingClientRect().right > width + 1 && !isClipped(one))
    return [`${document.documentElement.scrollWidth} px in a window of ${width}: ${wide.slice(0, 3).map(one => `<${one.tagName.toLowerCase()} class="${one.getAttribute('class') ?? ''}">`).join(' ')}`]
  })
}

/** Words that a value which is none leaves on a screen. */
export async function wordFaults(page: Page): Promise<string[]> {
  const text = await page.evaluate(() => document.body.innerText)
  return ['NaN', 'undefined', '[object', 'Infinity'].filter(word => text.includes(word)).map(word => `the page says ${word}`)
}
