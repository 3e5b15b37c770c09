import type { DemoPersonKey } from './people'

export type DemoLayout = 'long' | 'columnPerTube' | 'rowPerTube'

/** One agent's tubes in a file. `spoiled`: one tube that was not what its label says, as a factor on its concentration. */
export interface DemoPart { agent: string, lot: string, r_per_mM_s: number, concs_mM: readonly number[], spoiled?: { conc_mM: number, factor: number } }

/** A raw file whatever was measured: what of it goes through upload, fit and check. */
export interface DemoUpload {
  fileName: string
  kind: string
  parts: readonly Pick<DemoPart, 'agent' | 'lot' | 'spoiled'>[]
  by: DemoPersonKey
  day: string
  fate: 'signed' | 'waiting' | 'returned' | 'draft' | 'leaveOutAndSign'
}

/**
 * One raw file of the demonstration: what was in the tubes, how it was measured, how the table is laid out, and what became of it.
 * All values are invented; the signals follow from the forward model with seeded noise.
 */
export interface DemoFile extends DemoUpload {
  kind: 'relax.t1.ir' | 'relax.t1.sr' | 'relax.t1.ll' | 'relax.t1.vfa' | 'relax.t2.echo' | 'relax.fitted'
  parts: readonly DemoPart[]
  rateDia_per_s: number
  form: 'signed' | 'magnitude' | 'T1' | 'T2'
  layout: DemoLayout
  delimiter: ',' | ';' | '\t'
  decimal: '.' | ','
  byteOrderMark?: boolean
  windowsLines?: boolean
  /** Lines above the table, as the scanner room writes them. */
  head: readonly string[]
  noise_au: number
  /** T1 of the instrument's reference tube in this session; left out: the tube was not there. */
  referenceT1_s?: number
}

const PLASMA_3T = (instrument: string, form: string, date: string) => [
  `Instrument: ${instrument}`, 'Field: 3 T', 'Temperature: 37.0 °C', 'pH: 7.4', 'Medium: plasma', 'Timing: long TR', `Signal form: ${form}`, 'Concentration from: ICP', 'Common concentration error: 1.5 %', `Date: ${date}`,
]
const FITTED_3T = (measured: string, date: string) => ['Instrument: Bay 3', 'Field: 3 T', 'Temperature: 37.0 °C', 'pH: 7.4', 'Medium: plasma', `Measured: ${measured}`, 'Concentration from: ICP', 'Common concentration error: 1.5 %', `Date: ${date}`]

const SAMPLE_3T = (date: string) => ['Instrument: Bay 5', 'Field: 3 T', 'Temperature: 37.0 °C', 'pH: 7.4', 'Medium: plasma', 'Concentration from: ICP', 'Common concentration error: 1.5 %', `Date: ${date}`]
const ECHOES_3T = (date: string) => [...SAMPLE_3T(date), 'Echo spacing: 8 ms', 'Refocusing angle: 180°', 'Signal form: magnitude']

const RANGE = [0.1, 0.2, 0.35, 0.5, 0.75, 1, 1.5, 2] as const
const comma = { delimiter: ',', decimal: '.' } as const
const base = { kind: 'relax.t1.ir', rateDia_per_s: 0.58, noise_au: 4, ...comma } as const

const part = (agent: string, lot: string, r_per_mM_s: number, rest: Partial<DemoPart> = {}): DemoPart => ({ agent, lot, r_per_mM_s, concs_mM: RANGE, ...rest })

export const DEMO_FILES: readonly DemoFile[] = [
  { ...base, fileName: 'bay3_chain_and_ring_IR.csv', referenceT1_s: 0.4312, parts: [part('SK-01', 'A1', 4.05), part('SK-03', 'A1', 3.42)], form: 'signed', layout: 'long', head: PLASMA_3T('Bay 3', 'signed', '2026-09-08'), by: 'idris', day: '2026-09-08', fate: 'signed' },
  { ...base, fileName: 'SK-02_A1_bay3.csv', referenceT1_s: 0.4297, parts: [part('SK-02', 'A1', 4.21)], form: 'magnitude', layout: 'columnPerTube', head: PLASMA_3T('Bay 3', 'magnitude', '2026-09-09'), by: 'idris', day: '2026-09-09', fate: 'signed' },
  { ...base, fileName: 'SK-04_A1.tsv', referenceT1_s: 0.4321, parts: [part('SK-04', 'A1', 3.71)], form: 'signed', layout: 'rowPerTube', delimiter: '\t', decimal: '.', windowsLines: true, head: PLASMA_3T('Bay 3', 'signed', '2026-09-10'), by: 'idris', day: '2026-09-10', fate: 'signed' },
  { ...base, fileName: 'SK-05_A1_Reihe.csv', parts: [part('SK-05', 'A1', 2.32, { concs_mM: [0.2, 0.4, 0.7, 1, 1.5, 2, 3] })], form: 'signed', layout: 'long', delimiter: ';', decimal: ',', byteOrderMark: true, head: PLASMA_3T('Bay 5', 'signed', '2026-09-11').map(line => line.replaceAll('.', ',')), by: 'neve', day: '2026-09-11', fate: 'signed' },
  { ...base, fileName: 'SK-06_A1_bay3.csv', referenceT1_s: 0.4305, parts: [part('SK-06', 'A1', 6.84, { concs_mM: [0.05, 0.1, 0.2, 0.35, 0.5, 0.75, 1] })], form: 'magnitude', layout: 'columnPerTube', head: PLASMA_3T('Bay 3', 'magnitude', '2026-09-14'), by: 'idris', day: '2026-09-14', fate: 'signed' },
  { ...base, fileName: 'SK-07_A1_A2_one_blank.csv', referenceT1_s: 0.4289, parts: [part('SK-07', 'A1', 5.93), part('SK-07', 'A2', 5.98)], form: 'signed', layout: 'long', head: PLASMA_3T('Bay 3', 'signed', '2026-09-15'), by: 'idris', day: '2026-09-15', fate: 'signed' },
  { ...base, fileName: 'SK-09_A1_bay5.csv', parts: [part('SK-09', 'A1', 3.88, { spoiled: { conc_mM: 1.5, factor: 1.16 } })], form: 'signed', layout: 'columnPerTube', head: PLASMA_3T('Bay 5', 'signed', '2026-09-16'), by: 'idris', day: '2026-09-16', fate: 'leaveOutAndSign' },
  { ...base, fileName: 'SK-10_A1.csv', referenceT1_s: 0.4316, parts: [part('SK-10', 'A1', 4.66)], form: 'signed', layout: 'long', head: PLASMA_3T('Bay 3', 'signed', '2026-09-17'), by: 'neve', day: '2026-09-17', fate: 'signed' },
  { ...base, fileName: 'SK-10_B1.csv', referenceT1_s: 0.4301, parts: [part('SK-10', 'B1', 5.22)], form: 'signed', layout: 'long', head: PLASMA_3T('Bay 3', 'signed', '2026-09-22'), by: 'neve', day: '2026-09-22', fate: 'signed' },
  { ...base, fileName: 'SK-11_both_batches.csv', parts: [part('SK-11', 'A1', 3.55), part('SK-11', 'A2', 3.57)], form: 'magnitude', layout: 'long', head: PLASMA_3T('Bay 5', 'magnitude', '2026-09-18'), by: 'idris', day: '2026-09-18', fate: 'signed' },
  { ...base, fileName: 'SK-12_A1_L2.csv', referenceT1_s: 0.4462, parts: [part('SK-12', 'A1', 4.18, { spoiled: { conc_mM: 1.5, factor: 1.12 } })], form: 'signed', layout: 'columnPerTube', head: PLASMA_3T('Bay 3', 'signed', '2026-09-28'), by: 'idris', day: '2026-09-28', fate: 'waiting' },
  { ...base, fileName: 'SK-13_A1_short.csv', parts: [part('SK-13', 'A1', 3.95, { concs_mM: [0.1, 0.15, 0.2, 0.25] })], form: 'signed', layout: 'long', noise_au: 11, head: PLASMA_3T('Bay 5', 'signed', '2026-09-29'), by: 'neve', day: '2026-09-29', fate: 'returned' },
  { ...base, kind: 'relax.fitted', fileName: 'SK-14_T2_table.csv', parts: [part('SK-14', 'A1', 10.4, { concs_mM: [0.25, 0.5, 1, 1.5, 2, 3] })], rateDia_per_s: 6.1, form: 'T2', layout: 'long', head: FITTED_3T('T2', '2026-09-21'), by: 'idris', day: '2026-09-21', fate: 'signed' },
  { ...base, kind: 'relax.fitted', fileName: 'SK-15_water_T1.csv', parts: [part('SK-15', 'A1', 5.6)], rateDia_per_s: 0.36, form: 'T1', layout: 'long', head: ['Instrument: Table-top 60', 'Field: 1.41 T', 'Temperature: 37.0 °C', 'pH: 7.0', 'Medium: water', 'Measured: T1', 'Concentration from: weighing', 'Common concentration error: 3 %', 'Date: 2026-09-23'], by: 'neve', day: '2026-09-23', fate: 'signed' },
  { ...base, fileName: 'SK-16_A1.csv', referenceT1_s: 0.4294, parts: [part('SK-16', 'A1', 4.33)], form: 'signed', layout: 'long', head: PLASMA_3T('Bay 3', 'signed', '2026-09-24'), by: 'neve', day: '2026-09-24', fate: 'signed' },
  { ...base, kind: 'relax.fitted', fileName: 'SK-07_T2_3T.csv', parts: [part('SK-07', 'A1', 7.3)], rateDia_per_s: 5.8, form: 'T2', layout: 'long', head: FITTED_3T('T2', '2026-09-25'), by: 'idris', day: '2026-09-25', fate: 'signed' },
  // Measured by other sequences, so that each kind has a series to look at; unsigned r1 stands beside the signed one and does not move the map.
  { ...base, kind: 'relax.t2.echo', fileName: 'SK-02_A1_T2_echoes.csv', parts: [part('SK-02', 'A1', 4.92)], rateDia_per_s: 5.9, form: 'magnitude', layout: 'columnPerTube', noise_au: 3, head: ECHOES_3T('2026-10-01'), by: 'idris', day: '2026-10-01', fate: 'signed' },
  { ...base, kind: 'relax.t2.echo', fileName: 'SK-16_A1_T2_echoes.csv', parts: [part('SK-16', 'A1', 14.8)], rateDia_per_s: 5.9, form: 'magnitude', layout: 'long', noise_au: 22, head: [...ECHOES_3T('2026-10-02'), 'Background SD: 14.4'], by: 'neve', day: '2026-10-02', fate: 'draft' },
  { ...base, kind: 'relax.t1.sr', fileName: 'SK-03_A1_saturation.csv', parts: [part('SK-03', 'A1', 3.42)], form: 'magnitude', layout: 'columnPerTube', head: [...SAMPLE_3T('2026-10-05'), 'What TR is: repetition', 'Signal form: magnitude'], by: 'idris', day: '2026-10-05', fate: 'draft' },
  { ...base, kind: 'relax.t1.ll', fileName: 'SK-04_A1_look_locker.csv', parts: [part('SK-04', 'A1', 3.71)], form: 'signed', layout: 'long', head: [...SAMPLE_3T('2026-10-06'), 'Read-out angle: 6°', 'Pulse spacing: 60 ms', 'Signal form: signed'], by: 'idris', day: '2026-10-06', fate: 'waiting' },
  { ...base, kind: 'relax.t1.vfa', fileName: 'SK-06_A1_flip_angles.csv', parts: [part('SK-06', 'A1', 6.84, { concs_mM: [0.05, 0.1, 0.2, 0.35, 0.5, 0.75, 1] })], form: 'magnitude', layout: 'columnPerTube', noise_au: 0.6, head: [...SAMPLE_3T('2026-10-07'), 'TR: 12 ms', 'TE: 2 ms'], by: 'neve', day: '2026-10-07', fate: 'draft' },
]

/** A file that is in the folder and not in the database: for trying an upload by hand, as the tour in the README does. */
export const TRY_FILE: DemoFile = {
  ...base, fileName: 'try-me_SK-08_A1.csv', referenceT1_s: 0.4308, parts: [part('SK-08', 'A1', 4.47, { spoiled: { conc_mM: 0.75, factor: 1.15 } })], form: 'signed', layout: 'long', head: PLASMA_3T('Bay 3', 'signed', '2026-09-30'), by: 'idris', day: '2026-09-30', fate: 'draft',
}
