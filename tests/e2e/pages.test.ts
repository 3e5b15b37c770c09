import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openBrowser } from '../support/browser'
import { demoPlaces, type DemoPlaces } from '../support/demoPlaces'
import { accessibilityFaults, overflowFaults, wordFaults } from '../support/pageWalk'
import { settled, signInAs, watchedPage } from '../support/watchedPage'

type Walk = (places: DemoPlaces) => string[]

/** Every page of the product, by somebody who may open it. */
const WALKS: Readonly<Record<string, Walk>> = {
  nobody: () => ['/sign-in', '/reset', '/reset/no-such-token', '/invitation/no-such-token', '/first/no-such-token'],
  chemist: at => [
    '/skerry/bench', '/skerry/agents', '/skerry/agents/SK-07', '/skerry/agents/new', '/skerry/agents/SK-07/change?part=ligand', '/skerry/agents/SK-07/change?part=complex', '/skerry/agents/SK-07/batch', '/skerry/agents/SK-07/readiness',
    '/skerry/series', '/skerry/series/new', `/skerry/series/new?upload=${at.staged}`, `/skerry/series/${at.series}`, '/skerry/instruments', `/skerry/instruments/${at.instrument}`, '/skerry/sheets', '/skerry/sheets/new', `/skerry/sheets/${at.sheet}`, '/skerry/records', '/skerry/records/new', `/skerry/records/${at.record}`, `/skerry/records/${at.record}/change`, '/skerry/library',
  ],
  physicist: at => ['/skerry/bench', '/skerry/checks', `/skerry/checks/fit/${at.waitingFit}`, `/skerry/checks/record/${at.waitingRecord}`, `/skerry/checks/batchVersion/${at.batchVersion}`, '/skerry/stability', '/skerry/stability/SK-07', '/skerry/ligands', '/skerry/ligands?metal=Zn&library=1'],
  lead: at => ['/skerry/gaps', '/skerry/map', '/skerry/map?agent=SK-07', '/skerry/decisions', `/skerry/decisions/${at.decision}`, '/skerry/people', '/skerry/settings', '/skerry/audit', '/account'],
  partner: at => ['/skerry/agents', '/skerry/agents/SK-07', '/skerry/series', '/skerry/stability', '/skerry/ligands', '/skerry/map', '/skerry/decisions', `/skerry/decisions/${at.decision}`],
  administrator: () => ['/admin/people', '/admin/programmes', '/admin/audit', '/admin/system', '/admin/mail'],
}
const isFull = process.env.LANTHORN_TEST === 'full'
/** Colours do not change with the width: a phone is looked at in the dark as well only in the long run. */
const WIDTHS: readonly { width: number, height: number, themes: readonly ('light' | 'dark')[] }[] = [{ width: 1440, height: 900, themes: ['light', 'dark'] }, { width: 390, height: 844, themes: isFull ? ['light', 'dark'] : ['dark'] }]

// Up to sixteen pages are walked in one test, each looked at in both themes.
describe('every page, in both themes and both widths [WCAG 2.2 AA; look: 390 px without pushing sideways]', { timeout: 480_000 }, () => {
  let browser: Browser
  let places: DemoPlaces
  beforeAll(async () => {
    browser = await openBrowser()
    places = await demoPlaces()
  })
  afterAll(async () => { await browser?.close() })

  for (const [role, walk] of Object.entries(WALKS)) {
    for (const { width, height, themes } of WIDTHS) {
      it(`can be used by everybody, fits, and stays quiet: pages of the ${role}, ${width} px wide`, async () => {
        const watched = await watchedPage(browser, { width, height })
        const { page, faults } = watched
        if (role !== 'nobody') await signInAs(watched, `${role}@skerry.example`)
        for (const path of walk(places)) {
          await watched.open(path)
          await settled(page)
          expect(new URL(page.url()).pathname, `${role} is shown ${path}`).toBe(path.split('?')[0])
          for (const colorScheme of themes) {
            await page.emulateMedia({ colorScheme })
            faults.push(...[...await accessibilityFaults(page), ...await overflowFaults(page), ...await wordFaults(page)].map(fault => `${path} (${colorScheme}): ${fault}`))
          }
        }
        await watched.close()
        expect(faults).toEqual([])
      }, 300_000)
    }
  }

  it('says so in words where there is no such page, and when one is not open to the person', async () => {
    const watched = await watchedPage(browser)
    await signInAs(watched, 'partner@skerry.example')
    for (const path of ['/skerry/nothing', '/no-programme/agents', '/admin/people', '/skerry/checks']) {
      await watched.page.goto(path)
      const text = await watched.page.innerText('body')
      expect([path, /not open to you|no such|do not allow|does not open/i.test(text)]).toEqual([path, true])
    }
    await watched.close()
  })
})
