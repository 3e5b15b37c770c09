import { inversionRecovery3 } from '../../../shared/science/models/inversionRecovery3'
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
  const table = file.kind === 'relax.fitted' ? fittedTable(file, tubes, random) : recoveryTable(file, tubes, random)
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

function signals(file: DemoFile, tube: Tube, random: RandomSource): number[] {
  const signal_au = 1000 * (1 + 0.02 * random.normal())
  const parameters = Float64Array.of(signal_au, -1.94 * signal_au, 1 / tube.rate_per_s)
  const gradient = new Float64Array(3)
  return TI_MS.map((ti_ms) => {
    const noisy = inversionRecovery3.valueAndGradient(ti_ms / 1000, parameters, {}, gradient) + file.noise_au * random.normal()
    return Number((file.form === 'magnitude' ? Math.abs(noisy) : noisy).toFixed(1))
  })
}

function recoveryTable(file: DemoFile, tubes: readonly Tube[], random: RandomSource): Cell[][] {
  const values = tubes.map(tube => signals(file, tube, random))
  if (file.layout === 'columnPerTube') {
    const heads = tubes.map(tube => tube.agent ? `${tube.agent} ${write(tube.conc_mM, file)} mM` : 'blank')
    return [['TI (ms)', ...heads], ...TI_MS.map((ti, row) => [ti, ...values.map(column => column[row]!)])]
  }
  if (file.layout === 'rowPerTube') {
    return [['tube', 'agent', 'batch', 'conc (mM)', ...TI_MS.map(ti => `${ti} ms`)], ...tubes.map((tube, i) => [`t${i + 1}`, tube.agent, tube.lot, tube.conc_mM, ...values[i]!])]
  }
  return [['tube', 'agent', 'batch', 'conc (mM)', 'TI (ms)', 'signal'], ...tubes.flatMap((tube, i) => TI_MS.map((ti, row) => [`t${i + 1}`, tube.agent, tube.lot, tube.conc_mM, ti, values[i]![row]!]))]
}

function fittedTable(file: DemoFile, tubes: readonly Tube[], random: RandomSource): Cell[][] {
  const relativeError = file.form === 'T2' ? 0.012 : 0.007
  return [['tube', 'agent', 'batch', 'conc (mM)', `${file.form} (ms)`, `SE ${file.form} (ms)`], ...tubes.map((tube, i) => {
    const time_ms = 1000 / tube.rate_per_s
    return [`t${i + 1}`, tube.agent, tube.lot, tube.conc_mM, Number((time_ms * (1 + relativeError * random.normal())).toFixed(2)), Number((time_ms * relativeError).toFixed(2))]
  })]
}
