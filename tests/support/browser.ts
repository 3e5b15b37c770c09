import { type Browser, chromium } from 'playwright-core'
import { findProgram } from '../../scripts/lib/packages.mjs'

const QUIET = [
  '--headless', '--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync',
]

/** Debian's Chromium with an empty profile, asking nobody on the network for anything. Close it when done. */
export async function openBrowser(): Promise<Browser> {
  const program = process.env.LANTHORN_CHROMIUM ?? findProgram('chromium')
  if (program === null) throw new Error('Chromium is missing. Install the package chromium, or name a program with LANTHORN_CHROMIUM.')
  return await chromium.launch({ executablePath: program, args: QUIET })
}
