import type { Page } from 'playwright-core'

/** Chooses an agent's fit in the queue and makes the next version without one tube. */
export async function leaveTubeOut(page: Page, agent: string, tube: string, reason: string): Promise<void> {
  await page.getByRole('link', { name: new RegExp(`\\b${agent}\\b`) }).first().click()
  await page.locator('button.small-figure', { hasText: tube }).click()
  await page.getByRole('button', { name: /^Leave out tube/ }).click()
  await page.getByLabel('Reason', { exact: true }).fill(reason)
  await page.getByRole('button', { name: 'Fit the next version' }).click()
}

/** Puts the name of whoever is signed in to what the page shows. */
export async function checkAndSign(page: Page, version: string): Promise<void> {
  await page.getByRole('button', { name: new RegExp(`^Sign ${version}`) }).click()
  await page.getByRole('dialog').getByRole('button', { name: /^Sign/ }).click()
  await page.getByRole('dialog').waitFor({ state: 'hidden' })
}
