import type { RecordEntry } from '../../shared/evidence/records/entry'

/** Published constants, 25 °C, I = 0.1 M; log K of the complex, protonation constants most basic first, competing metals. */
export interface PublishedConstants { name: string, logK: number, protonation: number[], competitors: Partial<Record<'Ca' | 'Zn' | 'Cu', number>>, medium: string, citation: string, origin: 'paper' | 'memory' }

export const PUBLISHED = {
  dtpa: {
    name: 'Gd-DTPA', logK: 22.46, protonation: [10.49, 8.6, 4.28, 2.64, 2], competitors: { Ca: 10.75, Zn: 18.7, Cu: 21.38 }, medium: 'KCl',
    citation: 'Cacheris, Quay, Rocklage, Magn. Reson. Imaging 8, 467 (1990); Martell and Smith. Values from memory.', origin: 'memory',
  },
  dtpaBma: {
    name: 'Gd-DTPA-BMA', logK: 16.85, protonation: [9.37, 4.38, 3.31], competitors: { Ca: 7.17, Zn: 12.04, Cu: 13.05 }, medium: 'KCl',
    citation: 'Cacheris, Quay, Rocklage, Magn. Reson. Imaging 8, 467 (1990). Protonation constants looked up; log K from memory.', origin: 'memory',
  },
  dota: {
    name: 'Gd-DOTA', logK: 24.67, protonation: [12.09, 9.68, 4.55, 4.13], competitors: { Ca: 17.23, Zn: 21.05, Cu: 22.25 }, medium: 'NMe4Cl',
    citation: 'Clarke, Martell, Inorg. Chim. Acta 190, 27 and 37 (1991). Values from memory.', origin: 'memory',
  },
  hpDo3a: {
    name: 'Gd-HP-DO3A', logK: 23.8, protonation: [11.96, 9.43, 4.3, 3.26], competitors: { Ca: 14.83, Zn: 19.37, Cu: 22.84 }, medium: 'NMe4Cl',
    citation: 'Inorg. Chem. 32, 587 (1993); Inorg. Chem. 34, 6472 (1995). Values from memory.', origin: 'memory',
  },
} as const satisfies Record<string, PublishedConstants>

/** The entry that a person types for published constants. */
export function thermoEntry(one: PublishedConstants, changes: RecordEntry = {}): RecordEntry {
  const quantity = (value: number, se: number | null = null): RecordEntry[string] => ({ type: 'quantity', kind: '=', value, se, unit: '' })
  return {
    logK: quantity(one.logK, 0.1),
    protonation: { type: 'steps', steps: one.protonation.map(value => ({ value, se: 0.05 })) },
    protonationForm: { type: 'choice', choice: 'stepwise' },
    ...Object.fromEntries(Object.entries(one.competitors).map(([metal, value]) => [`logK${metal}`, quantity(value)])),
    temperature_K: { type: 'number', value: 25, unit: '°C' },
    ionicStrength_M: { type: 'number', value: 0.1, unit: 'M' },
    medium: { type: 'choice', choice: one.medium },
    method: { type: 'choice', choice: 'potentiometry' },
    pHScale: { type: 'choice', choice: 'concentration' },
    ...changes,
  }
}

/** A rate law as it is typed: constants in M⁻¹ s⁻¹ unless named otherwise, 25 °C, 1 M KCl. */
export function rateLawEntry(constants: Record<string, { value: number, se?: number, kind?: '=' | '<' | '>', unit?: string }>, changes: RecordEntry = {}): RecordEntry {
  return {
    form: { type: 'choice', choice: 'sum' },
    ...Object.fromEntries(Object.entries(constants).map(([key, { value, se, kind, unit }]) => [key, { type: 'quantity' as const, kind: kind ?? '=', value, se: se ?? null, unit: unit ?? (key === 'k0_per_s' ? 's^-1' : 'M^-1 s^-1') }])),
    temperature_K: { type: 'number', value: 25, unit: '°C' },
    pHMin: { type: 'number', value: 3.5, unit: '' },
    pHMax: { type: 'number', value: 5.2, unit: '' },
    ionicStrength_M: { type: 'number', value: 1, unit: 'M' },
    medium: { type: 'choice', choice: 'KCl' },
    ...changes,
  }
}
