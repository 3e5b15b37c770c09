import { readFile } from 'node:fs/promises'
import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openBrowser } from '../support/browser'
import { accessibilityFaults, overflowFaults } from '../support/pageWalk'
import { settled, signInAs, watchedPage } from '../support/watchedPage'

const PNG = Buffer.from([0x89, 0x50, 0x4E, 0x47])

/** What a menu entry beside the first figure of a pane saves. */
async function saved(page: Page, entry: string): Promise<{ name: string, bytes: Buffer }> {
  await page.getByRole('button', { name: /^Save: R1 over concentration|^Save: R2 over concentration/ }).first().click()
  const download = page.waitForEvent('download')
  await page.getByRole('menuitem', { name: entry }).click()
  const file = await download
  return { name: file.suggestedFilename(), bytes: await readFile(await file.path()) }
}

describe('the screens of a fit [issue: screens]', { timeout: 240_000 }, () => {
  let browser: Browser
  beforeAll(async () => { browser = await openBrowser() })
  afterAll(async () => { await browser?.close() })

  it('a series is fitted with another model and option, the versions lie side by side, figures are saved', async () => {
    const watched = await watchedPage(browser)
    const { page, faults } = watched
    await signInAs(watched, 'physicist@skerry.example')
    await watched.open('/skerry/series?agent=SK-16&kind=relax.t2.echo')
    await page.getByRole('link', { name: 'SK-16', exact: true }).first().click()
    await page.getByText('Versions', { exact: true }).waitFor()
    await page.getByLabel('Model', { exact: true }).selectOption('multiEchoNoiseFloor')
    await page.getByLabel('Interval', { exact: true }).selectOption('profile')
    await page.getByLabel('Noise of one pixel').selectOption('fitted')
    await page.getByRole('button', { name: 'Fit the next version' }).click()
    await page.getByRole('button', { name: 'v2', exact: true }).waitFor({ timeout: 60_000 })
    await settled(page)
    await page.locator('button.small-figure').nth(8).click()
    expect(await page.innerText('body')).toContain('profile of the sum of squares')
    for (const version of [1, 2]) await page.getByLabel(`Compare version ${version}`).check()
    await page.getByRole('button', { name: 'Compare side by side' }).click()
    await page.getByText('Side by side', { exact: true }).waitFor()
    await page.getByLabel('Tube', { exact: true }).selectOption({ index: 8 })
    faults.push(...await accessibilityFaults(page), ...await overflowFaults(page))

    const svg = await saved(page, 'Drawing, SVG')
    expect(svg.name).toMatch(/^SK-16-A1-v2-.*\.svg$/)
    const drawing = svg.bytes.toString('utf8')
    expect(drawing).toContain('<title>')
    expect(drawing).toContain('Screening research only')
    expect(drawing).not.toMatch(/var\(--|class=/)
    const png = await saved(page, 'Picture, PNG')
    expect(png.bytes.subarray(0, 4)).toEqual(PNG)
    expect(png.bytes.length).toBeGreaterThan(5_000)
    const csv = (await saved(page, 'Numbers, CSV')).bytes.toString('utf8')
    expect(csv.split('\r\n')[0]).toBe('\uFEFFTube,Concentration (mM),R2 (s^−1),SE (s^−1),Line (s^−1),"Residual, studentised",Left out')
    expect(csv).toContain('# Screening research only')
    await watched.close()
    expect(faults).toEqual([])
  })

  it('a tube sheet is planned from stock and dilutions, kept, and downloaded with its code', async () => {
    const watched = await watchedPage(browser, { width: 390, height: 844 })
    const { page, faults } = watched
    await signInAs(watched, 'chemist@skerry.example')
    await watched.open('/skerry/sheets/new')
    await page.getByLabel('Agent', { exact: true }).fill('SK-08')
    await page.getByLabel('Batch', { exact: true }).fill('A1')
    await page.getByRole('textbox', { name: 'Stock', exact: true }).fill('10')
    await page.getByRole('textbox', { name: 'standard error', exact: true }).fill('0.2')
    await page.getByLabel('Title', { exact: true }).fill('SK-08 A1 for Tuesday')
    await page.getByText(/Common error of all tubes: 2/).waitFor()
    faults.push(...await accessibilityFaults(page), ...await overflowFaults(page))
    await page.getByRole('button', { name: 'Keep the sheet' }).click()
    await page.waitForURL(/\/sheets\/TS-/)
    const code = new URL(page.url()).pathname.split('/').at(-1)!
    const download = page.waitForEvent('download')
    await page.getByRole('link', { name: 'File, CSV' }).click()
    const text = await readFile(await (await download).path(), 'utf8')
    expect(text).toContain(`Tube sheet,${code}`)
    expect(text).toContain('conc (mM),0,0.1,0.25,0.5,0.75,1')
    await watched.close()
    expect(faults).toEqual([])
  })
})
