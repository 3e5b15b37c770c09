import { mkdir, readFile } from 'node:fs/promises'
import { fileURLToPath } from 'node:url'
import type { Browser, Page } from 'playwright-core'
import { DEMO_PASSWORD } from '../shared/demo'
import { openBrowser } from '../tests/support/browser'
import { startStack } from '../tests/support/stack'

// Takes the pictures of the README from the running product with the demonstration loaded, into docs/pictures.
const WINDOW = { width: 1440, height: 900 }
const at = (path: string): string => fileURLToPath(new URL(`../${path}`, import.meta.url))

interface Picture { name: string, by: string, path: string, then?: (page: Page) => Promise<void> }

const PICTURES: readonly Picture[] = [
  { name: 'sheet', by: 'chemist', path: '/skerry/sheets/new', then: planStock },
  { name: 'instrument', by: 'physicist', path: '/skerry/instruments', then: openBay },
  { name: 'upload', by: 'chemist', path: '/skerry/series/new', then: dropFile },
  { name: 'series', by: 'chemist', path: '/skerry/series?agent=SK-09', then: openFirstSeries },
  { name: 'checks', by: 'physicist', path: '/skerry/checks', then: openWaitingFit },
  { name: 'stability', by: 'chemist', path: '/skerry/stability' },
  { name: 'map', by: 'lead', path: '/skerry/map?agent=SK-07' },
]

async function dropFile(page: Page): Promise<void> {
  const name = 'try-me_SK-08_A1.csv'
  await page.locator('input[type=file]').setInputFiles({ name, mimeType: 'text/csv', buffer: await readFile(at(`fixtures/demo/${name}`)) })
  await page.getByRole('button', { name: 'Store and fit' }).waitFor()
}

async function planStock(page: Page): Promise<void> {
  await page.getByLabel('Agent', { exact: true }).fill('SK-08')
  await page.getByLabel('Batch', { exact: true }).fill('A1')
  await page.getByRole('textbox', { name: 'Stock', exact: true }).fill('10.2')
  await page.getByRole('textbox', { name: 'standard error', exact: true }).fill('0.15')
  await page.getByLabel('Title', { exact: true }).fill('SK-08 A1, T1 in plasma')
}

async function openBay(page: Page): Promise<void> {
  await page.getByRole('link', { name: 'Bay 3', exact: true }).click()
  await page.getByText('sessions', { exact: true }).first().waitFor()
}

async function openFirstSeries(page: Page): Promise<void> {
  await page.getByRole('link', { name: 'SK-09', exact: true }).first().click()
  await page.getByText('Versions', { exact: true }).waitFor()
}

async function openWaitingFit(page: Page): Promise<void> {
  await page.getByRole('link', { name: /SK-12/ }).first().click()
  await page.getByText('Slope', { exact: true }).waitFor()
}

async function signIn(page: Page, who: string): Promise<void> {
  await page.goto('/sign-in')
  await alive(page)
  await page.getByLabel('E-mail').fill(`${who}@skerry.example`)
  await page.getByLabel('Password', { exact: true }).fill(DEMO_PASSWORD)
  await page.getByRole('button', { name: 'Sign in', exact: true }).click()
  await page.waitForURL(url => url.pathname !== '/sign-in')
}

async function alive(page: Page): Promise<void> {
  await page.waitForFunction(() => (window as unknown as { useNuxtApp?: () => { isHydrating: boolean } }).useNuxtApp?.().isHydrating === false)
}

async function take(browser: Browser, baseURL: string, { name, by, path, then }: Picture): Promise<void> {
  const context = await browser.newContext({ baseURL, viewport: WINDOW, colorScheme: 'light', reducedMotion: 'reduce' })
  const page = await context.newPage()
  await signIn(page, by)
  await page.goto(path)
  await alive(page)
  await then?.(page)
  await page.evaluate(() => document.fonts.ready.then(() => undefined))
  await page.waitForTimeout(1_500)
  await page.screenshot({ path: at(`docs/pictures/${name}.png`) })
  await context.close()
}

await mkdir(at('docs/pictures'), { recursive: true })
const stack = await startStack({ withDemo: true })
const browser = await openBrowser()
try {
  for (const picture of PICTURES) await take(browser, stack.baseURL, picture)
}
finally {
  await browser.close()
  await stack.stop()
}
