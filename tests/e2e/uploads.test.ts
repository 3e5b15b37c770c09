import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openBrowser } from '../support/browser'
import { accessibilityFaults, overflowFaults, wordFaults } from '../support/pageWalk'
import { longRows } from '../support/tableShapes'
import { settled, signInAs, watchedPage, type WatchedPage } from '../support/watchedPage'
import { STYLES, workbook, type HandCell } from '../support/workbookFiles'

/** Folder for pictures to look at; without one none are taken. */
const PICTURES = process.env.LANTHORN_PICTURES
const numbers: HandCell[][] = longRows().map(row => row.map(cell => /^-?[\d.]+$/.test(cell) ? Number(cell) : cell))
const put = (row: number, column: number, value: HandCell): HandCell[][] => numbers.map((cells, r) => cells.map((cell, c) => r === row && c === column ? value : cell))
const broken = put(7, 3, { xml: '<c r="@" t="e"><v>#DIV/0!</v></c>' })
const FILE = {
  name: 'phantom.xlsx', mimeType: 'application/vnd.openxmlformats-officedocument.spreadsheetml.sheet',
  buffer: Buffer.from(workbook([{ name: 'Day 1', rows: broken }, { name: 'Day 2', rows: numbers.slice(0, 33) }, { name: 'Conditions', rows: [['Field', '3 T'], ['Temperature', '37 °C'], ['pH', 7.4]] }], { styles: STYLES })),
}

async function picture({ page }: WatchedPage, name: string): Promise<void> {
  if (PICTURES) await page.screenshot({ path: `${PICTURES}/${name}.png`, fullPage: true })
}

describe('a workbook on the upload page', { timeout: 240_000 }, () => {
  let browser: Browser
  beforeAll(async () => { browser = await openBrowser() })
  afterAll(async () => { await browser?.close() })

  it.each([[1440, 900], [390, 844]])('names cells by sheet, offers its sheets and is mended in place, %i px wide', async (width, height) => {
    const watched = await watchedPage(browser, { width, height })
    const { page, faults } = watched
    await signInAs(watched, 'chemist@skerry.example')
    await watched.open('/skerry/series/new')
    await page.locator('input[type=file]').first().setInputFiles(FILE)
    await page.getByText('Sheet Day 1, row 8, column D').waitFor()
    await settled(page)
    await picture(watched, `workbook-${width}`)
    expect(await page.getByRole('button', { name: 'Store and fit' }).isDisabled()).toBe(true)
    await page.getByText('Sheet Day 1, row 8, column D').click()
    expect(await page.evaluate(() => document.activeElement?.getAttribute('data-cell'))).toBe('8:4')
    faults.push(...await accessibilityFaults(page), ...await overflowFaults(page), ...await wordFaults(page))

    await page.getByLabel('Name of tube 2').fill('second')
    await page.getByLabel('Name of tube 2').press('Tab')
    await page.getByLabel('Sheet', { exact: true }).selectOption('Day 2')
    await page.getByText('Sheet Day 1, row 8, column D').waitFor({ state: 'detached' })
    await settled(page)
    expect(await page.getByText('workbook', { exact: false }).count()).toBeGreaterThan(0)
    expect(await page.getByText('sheet Conditions, cell B1').count()).toBeGreaterThan(0)
    await picture(watched, `workbook-second-${width}`)
    await page.getByRole('button', { name: 'Discard' }).click()
    await page.getByText('nothing of it was stored').waitFor()
    await watched.close()
    expect(faults).toEqual([])
  })

  it('a file that is no table is refused in words, and another one can be chosen', async () => {
    const watched = await watchedPage(browser)
    const { page, faults } = watched
    await signInAs(watched, 'chemist@skerry.example')
    await watched.open('/skerry/series/new')
    await page.locator('input[type=file]').first().setInputFiles({ ...FILE, name: 'picture.xlsx', buffer: Buffer.from([0x89, 0x50, 0x4E, 0x47, 13, 10, 26, 10, 1, 2, 3]) })
    await page.getByText('a PNG picture').waitFor()
    await picture(watched, 'picture-as-workbook')
    await watched.close()
    expect(faults).toEqual([])
  })
})
