import { readFileSync } from 'node:fs'

interface TrueSet { steps: number[], ML: number, MHL?: number, MLOH?: number }
interface Tables { pKw: number, electrode: { e0_mV: number, slope_mV: number }, base_mM: number, files: Record<'moderate' | 'protonated' | 'batch', { true: TrueSet, rows: string[] }> }

/** Titrations made by a script of another language, with the constants behind them. */
export const TITRATIONS = JSON.parse(readFileSync(new URL('../../fixtures/reference/titration/tables.json', import.meta.url), 'utf8')) as Tables

/** Lines above the table; typed constants are off by `off`, so that a refinement has a way to go. */
export function titrationHead({ steps }: { steps: readonly number[] }, { off = 0.3, more = [] as readonly string[] } = {}): string[] {
  return [
    'Metal: Gd', 'Temperature: 25.0 °C', 'Ionic strength: 0.1 M', 'Electrolyte: KCl', `pKw: ${TITRATIONS.pKw}`, 'pH scale: concentration', `Ligand protons: ${steps.length}`, 'Initial volume: 50 mL', 'Base: 100 mM',
    `Protonation constants: ${steps.map((step, j) => (step + (j % 2 ? -off : off)).toFixed(2)).join('; ')}`, ...more, '',
  ]
}

/** A whole file of the fixture, ready to upload. */
export const titrationFile = (name: keyof Tables['files'], options: Parameters<typeof titrationHead>[1] = {}): string[] => [...titrationHead(TITRATIONS.files[name].true, options), ...TITRATIONS.files[name].rows]
