import { inversionRecovery3 } from '../../../shared/science/models/inversionRecovery3'
import { variableFlipAngle } from '../../../shared/science/models/variableFlipAngle'
import { createRandom, deriveSeed, type RandomSource } from '../../../shared/science/random'
import type { DemoFile, DemoPart } from './series'

/** Changing it makes other files; they are committed with it. */
export const DEMO_SEED = 'skerry-2026'

const TI_MS = [30, 60, 110, 180, 280, 420, 620, 900, 1300, 2000, 3200, 5000, 8000] as const
/** Spread of a pipetted concentration, relative. */
const PIPETTING = 0.006

interface Tube { label: string, agent: string, lot: string, conc_mM: number, rate_per_s: number }

/** Text of a raw file: the forward model with seeded noise, laid out as its table says. Same seed, same bytes. */
export function demoFileText(file: DemoFile): string {
  const random = createRandom(deriveSeed(DEMO_SEED, file.fileName))
  const tubes = tubesOf(file, random)
  const table = file.kind === 'relax.fitted' ? fittedTable(file, tubes, random) : file.kind === 'relax.t1.ir' ? recoveryTable(file, withReference(file, tubes), random) : otherTable(file, file.kind, tubes, random)
  const lines = [...file.head, '', ...table.map(row => row.map(cell => typeof cell === 'number' ? write(cell, file) : cell).join(file.delimiter))]
  return (file.byteOrderMark ? '\uFEFF' : '') + lines.join(file.windowsLines ? '\r\n' : '\n') + (file.windowsLines ? '\r\n' : '\n')
}

type Cell = string | number
const write = (value: number, { decimal }: DemoFile): string => String(value).replace('.', decimal)

function tubesOf(file: DemoFile, random: RandomSource): Tube[] {
  const blank: Tube = { label: 'blank', agent: '', lot: '', conc_mM: 0, rate_per_s: file.rateDia_per_s }
  return [blank, ...file.parts.flatMap(part => part.concs_mM.map(conc_mM => tubeOf(file, part, conc_mM, random)))]
}

function tubeOf(file: DemoFile, part: DemoPart, conc_mM: number, random: RandomSource): Tube {
  const spoiled = part.spoiled?.conc_mM === conc_mM ? part.spoiled.factor : 1
  const true_mM = conc_mM * (1 + PIPETTING * random.normal()) * spoiled
  return { label: `${part.agent} ${part.lot} ${conc_mM}`, agent: part.agent, lot: part.lot, conc_mM, rate_per_s: file.rateDia_per_s + part.r_per_mM_s * true_mM }
}

/** The reference tube stands last; its noise is its own, so that the samples read the same with it and without. */
function withReference(file: DemoFile, tubes: readonly Tube[]): Tube[] {
  return file.referenceT1_s === undefined ? [...tubes] : [...tubes, { label: 'REF', agent: '', lot: '', conc_mM: 0, rate_per_s: 1 / file.referenceT1_s }]
}

function signals(file: DemoFile, tube: Tube, random: RandomSource): number[] {
  const signal_au = 1000 * (1 + 0.02 * random.normal())
  const parameters = Float64Array.of(signal_au, -1.94 * signal_au, 1 / tube.rate_per_s)
  const gradient = new Float64Array(3)
  return TI_MS.map((ti_ms) => {
    const noisy = inversionRecovery3.valueAndGradient(ti_ms / 1000, parameters, {}, gradient) + file.noise_au * random.normal()
    return Number((file.form === 'magnitude' ? Math.abs(noisy) : noisy).toFixed(1))
  })
}

const nameOf = (tube: Tube, i: number): string => tube.label === 'REF' ? 'REF' : `t${i + 1}`
const concOf = (tube: Tube): Cell => tube.label === 'REF' ? '' : tube.conc_mM

function recoveryTable(file: DemoFile, tubes: readonly Tube[], random: RandomSource): Cell[][] {
  const values = tubes.map(tube => signals(file, tube, random))
  if (file.layout === 'columnPerTube') {
    const heads = tubes.map(tube => tube.label === 'REF' ? 'REF' : tube.agent ? `${tube.agent} ${write(tube.conc_mM, file)} mM` : 'blank')
    return [['TI (ms)', ...heads], ...TI_MS.map((ti, row) => [ti, ...values.map(column => column[row]!)])]
  }
  if (file.layout === 'rowPerTube') {
    return [['tube', 'agent', 'batch', 'conc (mM)', ...TI_MS.map(ti => `${ti} ms`)], ...tubes.map((tube, i) => [nameOf(tube, i), tube.agent, tube.lot, concOf(tube), ...values[i]!])]
  }
  return [['tube', 'agent', 'batch', 'conc (mM)', 'TI (ms)', 'signal'], ...tubes.flatMap((tube, i) => TI_MS.map((ti, row) => [nameOf(tube, i), tube.agent, tube.lot, concOf(tube), ti, values[i]![row]!]))]
}

function fittedTable(file: DemoFile, tubes: readonly Tube[], random: RandomSource): Cell[][] {
  const relativeError = file.form === 'T2' ? 0.012 : 0.007
  return [['tube', 'agent', 'batch', 'conc (mM)', `${file.form} (ms)`, `SE ${file.form} (ms)`], ...tubes.map((tube, i) => {
    const time_ms = 1000 / tube.rate_per_s
    return [`t${i + 1}`, tube.agent, tube.lot, tube.conc_mM, Number((time_ms * (1 + relativeError * random.normal())).toFixed(2)), Number((time_ms * relativeError).toFixed(2))]
  })]
}

type OtherKind = Exclude<DemoFile['kind'], 'relax.t1.ir' | 'relax.fitted'>

interface Acquisition {
  head: string
  /** As written in the file. */
  values: readonly number[]
  /** Signal of a tube with this rate; b1Scale: of a tube that has one. */
  signal: (value: number, rate_per_s: number, b1Scale: number) => number
}

const DEGREE = Math.PI / 180
const ACQUISITIONS: Readonly<Record<OtherKind, Acquisition>> = {
  'relax.t1.sr': { head: 'TR (ms)', values: [60, 110, 200, 350, 600, 1000, 1600, 2600, 4200, 7000], signal: (tr_ms, rate) => 1000 * (1 - Math.exp(-tr_ms * rate / 1000)) },
  'relax.t1.ll': {
    head: 'TI (ms)', values: Array.from({ length: 20 }, (_, i) => 30 + 60 * i),
    // Each pulse of 6° takes its share of the longitudinal magnetisation, which quickens the approach and lowers its end.
    signal: (ti_ms, rate) => {
      const apparent = rate - Math.log(Math.cos(6 * DEGREE)) / 0.06
      const plateau = 1000 * rate / apparent
      return plateau - (plateau + 970) * Math.exp(-ti_ms * apparent / 1000)
    },
  },
  'relax.t1.vfa': {
    head: 'flip angle (deg)', values: [2, 4, 6, 9, 12, 16, 20, 25, 30, 36],
    signal: (degrees, rate, b1Scale) => variableFlipAngle.evaluate(degrees * DEGREE, { m0_au: 9000, t1_s: 1 / rate }, { tr_s: 0.012, b1Scale }),
  },
  'relax.t2.echo': { head: 'TE (ms)', values: Array.from({ length: 24 }, (_, i) => 8 * (i + 1)), signal: (te_ms, rate) => 1000 * Math.exp(-te_ms * rate / 1000) },
}
const REGION_PIXELS = 120

/** Means over a region: magnitudes in noise of one pixel, averaged over its pixels; signed ones with the noise of a mean. */
function otherTable(file: DemoFile, kind: OtherKind, tubes: readonly Tube[], random: RandomSource): Cell[][] {
  const { head, values, signal } = ACQUISITIONS[kind]
  const scales = tubes.map(() => Number((1 + 0.03 * random.normal()).toFixed(3)))
  const columns = tubes.map((tube, i) => values.map((value) => {
    const clean = signal(value, tube.rate_per_s, scales[i]!)
    return Number((file.form === 'signed' ? clean + file.noise_au * random.normal() : regionMean(clean, file.noise_au, random)).toFixed(2))
  }))
  if (file.layout === 'long') {
    return [['tube', 'agent', 'batch', 'conc (mM)', head, 'signal'], ...tubes.flatMap((tube, i) => values.map((value, row) => [`t${i + 1}`, tube.agent, tube.lot, tube.conc_mM, value, columns[i]![row]!]))]
  }
  const names: Cell[] = [head, ...tubes.map(tube => tube.agent ? `${tube.agent} ${write(tube.conc_mM, file)} mM` : 'blank')]
  const b1: Cell[][] = kind === 'relax.t1.vfa' ? [['B1 scale', ...scales]] : []
  return [names, ...b1, ...values.map((value, row) => [value, ...columns.map(column => column[row]!)])]
}

function regionMean(clean: number, noise_au: number, random: RandomSource): number {
  let sum = 0
  for (let k = 0; k < REGION_PIXELS; k++) sum += Math.hypot(clean + noise_au * random.normal(), noise_au * random.normal())
  return sum / REGION_PIXELS
}
