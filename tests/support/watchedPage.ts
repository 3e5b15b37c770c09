import type { Browser, BrowserContext, Page } from 'playwright-core'
import { inject } from 'vitest'
import { DEMO_PASSWORD } from '../../shared/demo'

export interface WatchedPage {
  page: Page
  context: BrowserContext
  /** What must not happen: errors on the console, uncaught errors, requests that leave loopback. */
  faults: string[]
  /** Opens a path and waits until the page answers to presses. */
  open: (path: string) => Promise<void>
  close: () => Promise<void>
}

interface Look { width?: number, height?: number, colorScheme?: 'light' | 'dark', baseURL?: string }

/** A page of its own profile whose console and requests are watched from the first byte on. */
export async function watchedPage(browser: Browser, { width = 1440, height = 900, colorScheme = 'light', baseURL = inject('baseURL') }: Look = {}): Promise<WatchedPage> {
  const context = await browser.newContext({ baseURL, viewport: { width, height }, colorScheme, reducedMotion: 'reduce' })
  context.setDefaultTimeout(30_000)
  const page = await context.newPage()
  const faults: string[] = []
  const at = () => new URL(page.url()).pathname
  page.on('console', (message) => { if (['error', 'warning'].includes(message.type()) && !isOfTheBrowser(message.text())) faults.push(`${at()}: console ${message.type()}: ${message.text()}`) })
  page.on('pageerror', error => faults.push(`${at()}: ${error.stack ?? error.message}`))
  page.on('request', (request) => { if (leavesLoopback(request.url())) faults.push(`${at()}: request to ${request.url()}`) })
  const open = async (path: string): Promise<void> => {
    await page.goto(path)
    await hydrated(page)
  }
  return { page, context, faults, open, close: () => context.close() }
}

/** Waits until the page that the server drew has come alive. */
export async function hydrated(page: Page): Promise<void> {
  await page.waitForFunction(() => (window as unknown as { useNuxtApp?: () => { isHydrating: boolean } }).useNuxtApp?.().isHydrating === false)
}

const SETTLE_MS = 300

/** Waits until fonts are there and what the page asks for after it came alive is drawn. A stream of progress stays open, so there is no idle network to wait for. */
export async function settled(page: Page): Promise<void> {
  await page.evaluate(() => document.fonts.ready.then(() => undefined))
  await page.waitForTimeout(SETTLE_MS)
}

/** Signs in on the page as one of the invented people. */
export async function signInAs({ page, open }: Pick<WatchedPage, 'page' | 'open'>, email: string, password = DEMO_PASSWORD): Promise<void> {
  await open('/sign-in')
  await page.getByLabel('E-mail').fill(email)
  await page.getByLabel('Password', { exact: true }).fill(password)
  await page.getByRole('button', { name: 'Sign in', exact: true }).click()
  await page.waitForURL(url => url.pathname !== '/sign-in')
}

function leavesLoopback(url: string): boolean {
  const { protocol, hostname } = new URL(url)
  return ['http:', 'https:', 'ws:', 'wss:'].includes(protocol) && hostname !== '127.0.0.1'
}

/** Chromium's own words on drawing without a graphics card; nothing of the page. */
const isOfTheBrowser = (text: string): boolean => /GPU stall|GroupMarkerNotSet|WebGL/.test(text)
