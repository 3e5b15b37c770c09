import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openBrowser } from '../support/browser'
import { settled, signInAs, watchedPage } from '../support/watchedPage'

describe('a link to the map [issue: the map and the decision]', () => {
  let browser: Browser
  beforeAll(async () => { browser = await openBrowser() })
  afterAll(async () => { await browser?.close() })

  it('opens the view again for somebody else: agent, switches, table, and a number of the profile that nobody saved', async () => {
    const lead = await watchedPage(browser)
    await signInAs(lead, 'lead@skerry.example')
    await lead.open('/skerry/map')
    await lead.page.getByRole('button', { name: 'open chain', exact: true }).click()
    await lead.page.getByLabel('pH', { exact: true }).fill('7')
    await lead.page.getByText('Table', { exact: true }).click()
    await expect.poll(() => new URL(lead.page.url()).searchParams.toString(), { timeout: 10_000 }).toContain('set=pH%3A7')
    const address = new URL(lead.page.url())
    expect(Object.fromEntries(address.searchParams)).toMatchObject({ off: 'openChain', view: 'table', set: 'pH:7' })
    expect(lead.faults).toEqual([])
    await lead.close()

    const other = await watchedPage(browser)
    await signInAs(other, 'physicist@skerry.example')
    await other.open(`${address.pathname}${address.search}`)
    await settled(other.page)
    expect(await other.page.getByRole('button', { name: 'open chain', exact: true }).getAttribute('aria-pressed')).toBe('false')
    expect(await other.page.getByLabel('pH', { exact: true }).inputValue()).toBe('7')
    await other.page.getByRole('table', { name: 'Map as a table' }).waitFor()
    expect(other.faults).toEqual([])
    await other.close()
  })
})
