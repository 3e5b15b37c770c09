import type { Locator, Page } from 'playwright-core'
import { DEMO_AGENTS } from '../../db/seeds/demo/agents'
import { demoFileText } from '../../db/seeds/demo/forward'
import { TRY_FILE } from '../../db/seeds/demo/series'

export const AGENT = 'SK-17'
export const FILE_NAME = 'SK-17_A1_bay3.csv'

/** A raw file of the new agent: the forward model with noise, and one tube that was pipetted wrongly. */
export const fileText = (): string => demoFileText({
  ...TRY_FILE, fileName: FILE_NAME, parts: [{ agent: AGENT, lot: 'A1', r_per_mM_s: 4.4, concs_mM: [0.1, 0.2, 0.35, 0.5, 0.75, 1, 1.5, 2], spoiled: { conc_mM: 0.75, factor: 1.12 } }],
})

/** The chemist's form: ligand, complex and first batch in one. */
export async function registerAgent(page: Page): Promise<void> {
  const smiles = DEMO_AGENTS.find(one => one.code === 'SK-03')!.ligand.smiles
  await page.getByLabel('Code of the ligand').fill('SK-L17')
  await page.getByLabel('Name', { exact: true }).fill('ring of four amines, a variant')
  await page.getByLabel('Structure (SMILES)').fill(smiles)
  await page.getByRole('img', { name: 'the ligand' }).or(page.getByText('as drawn')).first().waitFor()
  await page.getByLabel('Code of the agent').fill(AGENT)
  await page.getByLabel('Hydration number q').fill('1')
  await page.getByLabel('Source of q').fill('luminescence of the Eu analogue')
  await page.getByLabel('Lot', { exact: true }).fill('A1')
  await page.getByLabel('Made on').fill('2026-09-30')
  await page.getByLabel('Concentrations are based on').selectOption('icp')
  await page.getByLabel('Free metal', { exact: true }).selectOption('below')
  await page.getByLabel('Detection limit').fill('0.002')
  await page.getByLabel('Method', { exact: true }).fill('xylenol orange, pH 5.8')
  await page.getByRole('button', { name: 'Register the agent' }).click()
  await page.waitForURL(`**/agents/${AGENT}`)
}

/** The rate law of the agent, typed from a notebook. */
export async function typeRateLaw(page: Page): Promise<void> {
  await page.getByLabel('Form', { exact: true }).selectOption('sum')
  await page.getByLabel('k0, spontaneous', { exact: true }).fill('2.2e-10')
  await page.getByLabel('k1, proton-assisted', { exact: true }).fill('3,1e-6')
  await page.getByLabel('Activation enthalpy', { exact: true }).fill('64')
  await page.getByLabel('Temperature', { exact: true }).fill('25')
  await page.getByLabel('Lowest pH measured').fill('0')
  await page.getByLabel('Highest pH measured').fill('1.5')
  await page.getByLabel('Electrolyte').selectOption('KCl')
  await page.getByLabel('Citation, or notebook page').fill('Notebook 17, page 4; invented for this test')
  await page.getByLabel('Values were taken').selectOption('own')
  await page.getByRole('button', { name: 'Store the record' }).click()
  await page.waitForURL(/\/records\/[\da-f-]{36}$/)
}

/** Presses an agent's mark. @returns the pane that says everything of it */
export async function chooseOnMap(page: Page, agent: string): Promise<Locator> {
  // The mark's own disc: its stem and arrows reach far to the side.
  await page.getByRole('button', { name: new RegExp(`^${agent}\\b`) }).first().locator('.map-target').click()
  const pane = page.getByRole('region', { name: `Agent ${agent}` })
  await pane.waitFor()
  return pane
}
