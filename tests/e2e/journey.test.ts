import { createHash } from 'node:crypto'
import { readdir, readFile } from 'node:fs/promises'
import { join } from 'node:path'
import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { openBrowser } from '../support/browser'
import { checkAndSign, leaveTubeOut } from '../support/checking'
import { AGENT, chooseOnMap, FILE_NAME, fileText, registerAgent, typeRateLaw } from '../support/journey'
import { settled, signInAs, watchedPage, type WatchedPage } from '../support/watchedPage'

interface CaughtMail { to: string[], subject: string, text: string }

/** Mail of the run that names all the words, once it is there: the outbox is emptied by the worker. */
async function mailAbout(...words: string[]): Promise<CaughtMail[]> {
  const folder = inject('mailFolder')
  const end = Date.now() + 60_000
  for (;;) {
    const names = (await readdir(folder)).filter(name => name.endsWith('.json'))
    const mails = await Promise.all(names.map(async name => JSON.parse(await readFile(join(folder, name), 'utf8')) as CaughtMail))
    const found = mails.filter(({ subject, text }) => words.every(word => `${subject}\n${text}`.includes(word)))
    if (found.length > 0 || Date.now() > end) return found
    await new Promise(resolve => setTimeout(resolve, 250))
  }
}

// Each step goes on from the one before, as the work does.
describe('the whole way, as each role in turn [issue: from an uploaded phantom file to a recorded decision]', () => {
  let browser: Browser
  const faults: string[] = []
  beforeAll(async () => { browser = await openBrowser() })
  afterAll(async () => { await browser?.close() })

  async function as(who: string, work: (watched: WatchedPage) => Promise<void>): Promise<void> {
    const watched = await watchedPage(browser)
    await signInAs(watched, `${who}@skerry.example`)
    await work(watched)
    faults.push(...watched.faults)
    await watched.close()
  }

  it('lets the chemist register an agent, upload its file, look at the fit and send it for checking', async () => {
    await as('chemist', async ({ page, open }) => {
      await open('/skerry/agents/new')
      await registerAgent(page)
      await page.getByRole('link', { name: 'Upload a file' }).click()
      await page.locator('input[type=file]').setInputFiles({ name: FILE_NAME, mimeType: 'text/csv', buffer: Buffer.from(fileText()) })
      await page.getByRole('button', { name: 'Store and fit' }).click()
      await page.waitForURL(/\/series\/[\w-]{36}$/)
      await page.getByRole('button', { name: 'Send v1 for checking' }).click()
      await page.getByRole('dialog').getByRole('button', { name: 'Send for checking' }).click()
      await page.getByText('waiting for check').first().waitFor()
    })
  })

  it('lets the physicist leave the spoiled tube out with a reason, and sign the version that follows', async () => {
    await as('physicist', async ({ page, open }) => {
      await open('/skerry/checks')
      await leaveTubeOut(page, AGENT, '0.75 mM', 'Pipetting log: this tube was filled from another stock.')
      await checkAndSign(page, 'v2')
    })
    expect((await mailAbout(AGENT, 'signed')).flatMap(one => one.to)).toContain('chemist@skerry.example')
  })

  it('lets the chemist type a rate law, and the physicist sign it', async () => {
    let record = ''
    await as('chemist', async ({ page, open }) => {
      await open(`/skerry/records/new?agent=${AGENT}&kind=rateLaw`)
      await typeRateLaw(page)
      record = new URL(page.url()).pathname.split('/').at(-1)!
      await page.getByRole('button', { name: 'Send for checking' }).click()
      await page.getByText('waiting for check').first().waitFor()
    })
    await as('physicist', async ({ page, open }) => {
      await open(`/skerry/checks/record/${record}`)
      await checkAndSign(page, 'v1')
    })
  })

  it('puts the agent on the map for the lead, from where every number leads to the hash of the raw file', async () => {
    const sha256 = createHash('sha256').update(fileText()).digest('hex')
    await as('lead', async ({ page, open }) => {
      await open('/skerry/map')
      const pane = await chooseOnMap(page, AGENT)
      await pane.getByText(/Rests on \d/).click()
      await pane.locator('dt', { hasText: 'Relaxivity' }).locator('xpath=following-sibling::dd[1]').getByRole('button').click()
      const chain = page.getByRole('dialog', { name: 'Where from?' })
      await chain.getByText(FILE_NAME).waitFor()
      expect(await chain.innerText()).toContain(sha256.slice(0, 8))
      expect(await chain.locator(`[title="${sha256}"]`).count()).toBe(1)
      // The chain is walked: from the number to the series that it comes from, whose page names the same bytes.
      const downloading = page.waitForEvent('download')
      await chain.getByRole('link', { name: FILE_NAME }).click()
      expect(await readFile(await (await downloading).path(), 'utf8')).toBe(fileText())
      await chain.getByRole('listitem').filter({ hasText: /^series/ }).getByRole('link').click()
      await page.waitForURL(/\/series\/[\w-]{36}/)
      await page.locator(`[title="${sha256}"]`).first().waitFor()
    })
  })

  it('lets the lead decide with reasons, and tells the whole programme by mail', async () => {
    await as('lead', async ({ page, open }) => {
      await open('/skerry/map')
      await (await chooseOnMap(page, AGENT)).getByRole('button', { name: /^Onto the shortlist/ }).click()
      await page.getByRole('button', { name: `Decide on ${AGENT}…` }).click()
      const dialog = page.getByRole('dialog')
      await dialog.getByText('advance', { exact: true }).click()
      await dialog.getByLabel(`Reasons for ${AGENT}`).fill('Holds its metal a hundred times longer than the chain, at a working concentration that can be given.')
      await dialog.getByRole('button', { name: /^Record/ }).click()
      await dialog.waitFor({ state: 'hidden' })
      await open('/skerry/decisions')
      await page.getByRole('link', { name: AGENT }).first().waitFor()
    })
    const people = (await mailAbout(AGENT, 'advance')).flatMap(one => one.to)
    expect(people).toEqual(expect.arrayContaining(['chemist@skerry.example', 'physicist@skerry.example', 'partner@skerry.example']))
  })

  it('shows the partner what is signed and the decision, and nothing that is not', async () => {
    await as('partner', async ({ page, open }) => {
      await open('/skerry/series')
      await settled(page)
      const series = await page.getByRole('main').innerText()
      expect(series).toContain(AGENT)
      expect(series).not.toContain('waiting for check')
      expect(series).not.toContain(FILE_NAME)
      // SK-13 went back to its chemist and was never signed.
      expect(series).not.toContain('SK-13')
      await open('/skerry/decisions')
      await page.getByText(AGENT).first().waitFor()
      expect(await page.getByRole('navigation', { name: 'Pages', exact: true }).getByRole('link').allInnerTexts()).not.toContain('Checks')
    })
  })

  it('kept the console clean and every request on loopback, all the way', () => {
    expect(faults).toEqual([])
  })
})
