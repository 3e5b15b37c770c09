import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openBrowser } from '../support/browser'
import { sendTourFile } from '../support/demoPlaces'
import { settled, signInAs, watchedPage } from '../support/watchedPage'

const MOST_TABS = 80

/** Goes on with Tab, as a person would, until what has the focus is what is wanted. */
async function tabTo(page: Page, isThere: (focused: { tag: string, words: string }) => boolean): Promise<void> {
  for (let i = 0; i < MOST_TABS; i++) {
    await page.keyboard.press('Tab')
    const focused = await page.evaluate(() => {
      const one = document.activeElement
      const label = one instanceof HTMLTextAreaElement || one instanceof HTMLInputElement ? one.labels?.[0]?.textContent : one?.textContent
      return { tag: one?.tagName ?? '', words: (label ?? '').trim() }
    })
    if (isThere(focused)) return
  }
  throw new Error(`Tab did not get there in ${MOST_TABS} steps.`)
}

/** Whether what has the focus shows it: itself, or the field around it. */
const showsFocus = (page: Page): Promise<boolean> => page.evaluate(() => {
  const focused = document.activeElement ?? document.body
  return [focused, focused.closest('.field') ?? focused].some((one) => {
    const { outlineStyle, outlineWidth } = getComputedStyle(one)
    return outlineStyle !== 'none' && parseFloat(outlineWidth) > 0
  })
})

describe('checking with the keyboard alone [look: keys of the checks page; WCAG 2.1.1, 2.1.4, 2.4.7]', () => {
  let browser: Browser
  beforeAll(async () => { browser = await openBrowser() })
  afterAll(async () => { await browser?.close() })

  it('goes from the queue over a tube left out to a signature, without a mouse', async () => {
    const fit = await sendTourFile()
    const watched = await watchedPage(browser)
    const { page } = watched
    await signInAs(watched, 'physicist@skerry.example')
    await watched.open('/skerry/checks')
    const chosen = page.locator('a[aria-current="true"]')
    const waiting = await page.getByRole('region', { name: 'To check' }).getByRole('listitem').count()
    for (let i = 0; i < waiting && !page.url().includes(fit); i++) {
      await page.keyboard.press('j')
      // The queue marks what is looked at once its check has come; J goes on from there.
      await expect.poll(() => page.getByRole('region', { name: 'To check' }).getByRole('link').evaluateAll(all => all.findIndex(one => one.getAttribute('aria-current') === 'true')), { timeout: 30_000 }).toBe(i)
    }
    expect(await chosen.getAttribute('href')).toContain(fit)
    await page.getByRole('heading', { level: 1, name: /SK-08/ }).waitFor()
    await settled(page)
    // The tube that was pipetted wrongly is the sixth.
    for (let i = 0; i < 6; i++) await page.keyboard.press('ArrowRight')
    await page.getByRole('button', { name: 'Leave out tube 6, 0.75 mM' }).waitFor()
    await page.keyboard.press('x')
    await tabTo(page, ({ tag, words }) => tag === 'TEXTAREA' && words.startsWith('Reason'))
    expect(await showsFocus(page)).toBe(true)
    await page.keyboard.type('Pipetting log: filled from another stock.')
    await tabTo(page, ({ tag, words }) => tag === 'BUTTON' && words.startsWith('Fit the next version'))
    expect(await showsFocus(page)).toBe(true)
    await page.keyboard.press('Enter')
    await page.waitForURL(url => !url.href.includes(fit) && url.pathname.includes('/checks/fit/'))
    await page.getByRole('button', { name: /^Sign v2/ }).waitFor()
    await page.keyboard.press('s')
    await page.getByRole('dialog').waitFor()
    await page.keyboard.press('Enter')
    await page.getByRole('dialog').waitFor({ state: 'hidden' })
    await page.getByText(/^signed( once of two)?$/).first().waitFor()
    expect(watched.faults).toEqual([])
    await watched.close()
  })

  it('does nothing at a single key once single keys are switched off, and never while a person types', async () => {
    const watched = await watchedPage(browser)
    const { page } = watched
    await signInAs(watched, 'physicist@skerry.example')
    await watched.open('/skerry/checks')
    await page.keyboard.press('/')
    await page.keyboard.type('j')
    expect(new URL(page.url()).pathname).toBe('/skerry/checks')
    await page.getByLabel('Single keys on').uncheck()
    await page.getByRole('heading', { name: 'To check' }).click()
    await page.keyboard.press('j')
    await page.waitForTimeout(300)
    expect(new URL(page.url()).pathname).toBe('/skerry/checks')
    await page.getByLabel('Single keys on').check()
    await page.getByRole('heading', { name: 'To check' }).click()
    await page.keyboard.press('j')
    await page.waitForURL(/\/checks\/\w+\/[\w-]+/)
    await watched.close()
  })
})
