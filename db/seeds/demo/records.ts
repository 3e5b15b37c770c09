import type { RecordEntry } from '../../../shared/evidence/records/entry'
import type { DemoPersonKey } from './people'

type Constant = number | { value: number, se?: number, kind?: '<' | '>' }
export interface DemoRecord { agent: string, kind: 'thermo' | 'rateLaw' | 'acidHalfLife' | 'zincPhosphateRatio', entry: RecordEntry, by: DemoPersonKey, fate: 'signed' | 'waiting' | 'draft', origin: 'paper' | 'own', citation: string }

const OWN = 'Invented for the demonstration; stands for a measurement of the programme\'s own.'
const READ = 'Invented for the demonstration; stands for a value read in a publication.'
const quantity = (constant: Constant, unit: string): RecordEntry[string] => {
  const one = typeof constant === 'number' ? { value: constant } : constant
  return { type: 'quantity', kind: ('kind' in one && one.kind) || '=', value: one.value, se: 'se' in one && one.se !== undefined ? one.se : null, unit }
}
const choice = (word: string): RecordEntry[string] => ({ type: 'choice', choice: word })
const number = (value: number, unit: string): RecordEntry[string] => ({ type: 'number', value, unit })
const AT_25 = { temperature_K: number(25, '°C'), ionicStrength_M: number(0.1, 'M'), medium: choice('NMe4Cl') }

function thermo(agent: string, logK: number, competitors: Partial<Record<'Ca' | 'Zn' | 'Cu', number>>, rest: Partial<DemoRecord> = {}): DemoRecord {
  const entry: RecordEntry = {
    logK: quantity({ value: logK, se: 0.08 }, ''), ...Object.fromEntries(Object.entries(competitors).map(([metal, value]) => [`logK${metal}`, quantity({ value, se: 0.1 }, '')])),
    ...AT_25, method: choice('potentiometry'), pHScale: choice('concentration'),
  }
  return { agent, kind: 'thermo', entry, by: 'idris', fate: 'signed', origin: 'own', citation: OWN, ...rest }
}

function rateLaw(agent: string, constants: Partial<Record<'k0_per_s' | 'k1_per_M_s' | 'kZn_per_M_s' | 'kCu_per_M_s', Constant>>, rest: Partial<DemoRecord> & { pH?: [number, number] } = {}): DemoRecord {
  const { pH = [3.5, 5.2], ...record } = rest
  const entry: RecordEntry = {
    form: choice('sum'), ...Object.fromEntries(Object.entries(constants).map(([key, value]) => [key, quantity(value, key === 'k0_per_s' ? 's^-1' : 'M^-1 s^-1')])),
    activationEnthalpy: quantity({ value: 62, se: 4 }, 'kJ/mol'), temperature_K: number(25, '°C'), pHMin: number(pH[0], ''), pHMax: number(pH[1], ''), ionicStrength_M: number(1, 'M'), medium: choice('KCl'),
  }
  return { agent, kind: 'rateLaw', entry, by: 'idris', fate: 'signed', origin: 'own', citation: OWN, ...record }
}

/** Typed stability records of the demonstration, all invented. */
export const DEMO_RECORDS: readonly DemoRecord[] = [
  thermo('SK-01', 22.4, { Ca: 10.7, Zn: 18.6, Cu: 21.4 }), rateLaw('SK-01', { k1_per_M_s: { value: 0.58, se: 0.02 }, kZn_per_M_s: { value: 0.056, se: 0.004 }, kCu_per_M_s: { value: 0.93, se: 0.05 } }),
  thermo('SK-02', 16.8, { Ca: 7.2, Zn: 12.0, Cu: 13.1 }), rateLaw('SK-02', { k1_per_M_s: { value: 12.7, se: 0.5 }, kZn_per_M_s: { value: 0.0078, se: 0.0006 }, kCu_per_M_s: { value: 0.63, se: 0.03 } }),
  thermo('SK-03', 24.6, { Ca: 17.2, Zn: 21.0, Cu: 22.2 }), rateLaw('SK-03', { k0_per_s: { value: 4e-11, kind: '<' }, k1_per_M_s: { value: 1.9e-6, se: 1.2e-7 } }, { pH: [0, 1.5] }),
  thermo('SK-04', 23.7, { Ca: 14.8, Zn: 19.4, Cu: 22.8 }), rateLaw('SK-04', { k0_per_s: { value: 6e-10, se: 1.5e-10 }, k1_per_M_s: { value: 2.7e-4, se: 1.5e-5 } }, { pH: [0, 2] }),
  thermo('SK-05', 13.1, { Ca: 10.3, Zn: 13.6, Cu: 14.6 }, { by: 'neve' }), rateLaw('SK-05', { k0_per_s: { value: 2.5e-10, se: 9e-11 }, k1_per_M_s: { value: 1.1e-6, se: 2e-7 } }, { by: 'neve', pH: [0, 1] }),
  thermo('SK-06', 24.1, { Ca: 16.9, Zn: 20.7, Cu: 22.0 }), rateLaw('SK-06', { k0_per_s: { value: 3e-10, se: 8e-11 }, k1_per_M_s: { value: 8e-6, se: 6e-7 } }, { pH: [0, 1.5] }),
  thermo('SK-07', 20.9, { Ca: 12.7, Zn: 20.5, Cu: 18.8 }), rateLaw('SK-07', { k0_per_s: { value: 9e-10, se: 2e-10 }, k1_per_M_s: { value: 5.1e-4, se: 3e-5 } }, { pH: [0, 2] }),
  thermo('SK-08', 15.8, { Ca: 9.5, Zn: 17.6, Cu: 20.0 }, { origin: 'paper', citation: READ, by: 'neve' }),
  thermo('SK-09', 24.9, { Ca: 17.0, Zn: 21.1, Cu: 22.4 }), rateLaw('SK-09', { k0_per_s: { value: 1.2e-10, se: 4e-11 }, k1_per_M_s: { value: 1.6e-5, se: 1e-6 } }, { pH: [0, 1.5] }),
  thermo('SK-10', 23.9, { Ca: 15.2, Zn: 19.9, Cu: 22.1 }), rateLaw('SK-10', { k0_per_s: { value: 4e-10, se: 9e-11 }, k1_per_M_s: { value: 2.8e-4, se: 1.4e-5 } }, { pH: [0, 2] }),
  thermo('SK-11', 25.2, { Ca: 17.5, Zn: 21.3, Cu: 22.7 }), rateLaw('SK-11', { k0_per_s: { value: 2e-11, kind: '<' }, k1_per_M_s: { value: 1.5e-7, kind: '<' } }, { pH: [0, 0.5] }),
  thermo('SK-12', 24.3, { Ca: 16.8, Zn: 20.8, Cu: 22.1 }), rateLaw('SK-12', { k0_per_s: { value: 2e-10, se: 6e-11 }, k1_per_M_s: { value: 6e-6, se: 5e-7 } }, { pH: [0, 1.5] }),
  rateLaw('SK-13', { k0_per_s: { value: 8e-10, se: 3e-10 }, k1_per_M_s: { value: 1.4e-4, se: 1e-5 } }, { fate: 'waiting', by: 'neve', pH: [0, 2] }),
  thermo('SK-14', 24.8, { Ca: 17.2, Zn: 21.0, Cu: 22.2 }), rateLaw('SK-14', { k0_per_s: { value: 9e-11, se: 3e-11 }, k1_per_M_s: { value: 2.2e-6, se: 2e-7 } }, { pH: [0, 1.5] }),
  thermo('SK-15', 23.1, { Ca: 11.4, Zn: 19.0, Cu: 21.9 }), rateLaw('SK-15', { k1_per_M_s: { value: 0.021, se: 0.001 }, kZn_per_M_s: { value: 0.0009, se: 0.0001 }, kCu_per_M_s: { value: 0.012, se: 0.001 } }),
  {
    agent: 'SK-16', kind: 'acidHalfLife', by: 'neve', fate: 'signed', origin: 'own', citation: OWN,
    entry: { halfLife: { type: 'quantity', kind: '=', value: 61, se: 3, unit: 'h' }, acid_M: number(0.1, 'M'), acid: choice('HCl'), temperature_K: number(25, '°C') },
  },
  {
    agent: 'SK-16', kind: 'zincPhosphateRatio', by: 'neve', fate: 'signed', origin: 'own', citation: OWN,
    entry: {
      ratioAt72h: { type: 'quantity', kind: '=', value: 0.96, se: 0.01, unit: '' }, timeTo080: { type: 'quantity', kind: '>', value: 120, se: null, unit: 'h' }, measuredOn: choice('itself'),
      b0_T: number(20, 'MHz'), rate1Dia_per_s: number(0.38, 's^-1'), complex_mM: number(2.5, 'mM'), zinc_mM: number(2.5, 'mM'), phosphate_mM: number(67, 'mM'), pH: number(7, ''),
      temperature_K: number(37, '°C'), buffer: { type: 'text', text: 'phosphate' },
    },
  },
]
