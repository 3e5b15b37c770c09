import { createRandom } from '../../shared/science/random'

interface Phantom { seed: string, agent?: string, lot?: string, instrument?: string, temperature?: string, date?: string, r1?: number, referenceT1_s?: number, concs?: readonly number[] }

const TI_MS = [30, 60, 120, 240, 450, 800, 1400, 2500, 5000]

/** An inversion-recovery file of one agent as a scanner room writes it, with a reference tube where asked: seeded noise of 0.3 %. */
export function recoveryText({ seed, agent = 'SK-07', lot = 'L1', instrument = 'Bay 3', temperature = '37.0 °C', date = '2026-03-01', r1 = 4.2, referenceT1_s, concs = [0, 0.25, 0.5, 1, 2] }: Phantom): string {
  const random = createRandom(seed)
  const head = [`Instrument: ${instrument}`, 'Field: 3 T', `Temperature: ${temperature}`, 'pH: 7.4', 'Medium: plasma', 'Timing: long TR', 'Signal form: signed', 'Concentration from: ICP', 'Common concentration error: 1.5 %', `Date: ${date}`, '']
  const signals = (t1_s: number) => TI_MS.map(ti => (1000 - 1940 * Math.exp(-ti / 1000 / t1_s) + 3 * random.normal()).toFixed(2))
  const rows = concs.flatMap((conc, i) => signals(1 / (0.5 + r1 * conc)).map((signal, k) => [`t${i + 1}`, conc === 0 ? '' : agent, conc === 0 ? '' : lot, conc, TI_MS[k], signal].join(',')))
  const reference = referenceT1_s === undefined ? [] : signals(referenceT1_s).map((signal, k) => ['REF', '', '', '', TI_MS[k], signal].join(','))
  return [...head, 'tube,agent,batch,conc (mM),TI (ms),signal', ...rows, ...reference].join('\n') + '\n'
}

/** A multi-echo file of the same tubes. */
export function echoText({ seed, agent = 'SK-07', lot = 'L1', r1: r2 = 5.4, date = '2026-03-01', concs = [0, 0.25, 0.5, 1, 2] }: Phantom): string {
  const random = createRandom(seed)
  const head = ['Instrument: Bay 3', 'Field: 3 T', 'Temperature: 37.0 °C', 'pH: 7.4', 'Medium: plasma', 'Echo spacing: 8 ms', 'Signal form: signed', 'Concentration from: ICP', 'Common concentration error: 1.5 %', `Date: ${date}`, '']
  const times = Array.from({ length: 20 }, (_, i) => 8 * (i + 1))
  const rows = concs.flatMap((conc, i) => times.map(te => [`t${i + 1}`, conc === 0 ? '' : agent, conc === 0 ? '' : lot, conc, te, (1000 * Math.exp(-te / 1000 * (5.9 + r2 * conc)) + 2 * random.normal()).toFixed(2)].join(',')))
  return [...head, 'tube,agent,batch,conc (mM),TE (ms),signal', ...rows].join('\n') + '\n'
}
