import { secondOpinionCost, makeSeries, tubeData } from './seriesInput'
import { INVERSION_SIGNALS, relaxT1Ir } from '../shared/measurements/relaxT1Ir'
import { seriesOutcome } from '../shared/measurements/relaxation/seriesOutcome'
import { fitSignalTubes } from '../shared/measurements/relaxation/signalTubes'
import type { Model } from '../shared/science/models/define'
import { inversionRecovery3 } from '../shared/science/models/inversionRecovery3'
import { fitTubes } from '../shared/science/relaxometry/tubes'
import { median, takeTurns } from './rounds'

/** A series of 96 tubes with flags, diagnostics and slope against its bare fits; the second opinion counted apart; and how both grow with ten times the tubes. */
export function run(): void {
  const [small, large] = [makeSeries(96), makeSeries(960)]
  const whole = (input: ReturnType<typeof makeSeries>): number => {
    const tubes = fitSignalTubes(input, INVERSION_SIGNALS, { secondOpinion: false })
    const outcome = seriesOutcome({ input, tubes, digit: '1', flags: [], method: () => '' })
    if (!outcome.ok) throw new Error(outcome.message)
    return outcome.series.headline.value
  }
  const [smallData, largeData] = [tubeData(small), tubeData(large)]
  const bare = (data: ReturnType<typeof tubeData>): number => fitTubes(inversionRecovery3 as Model, data, 'signed').tubes.length
  const rows = takeTurns([
    { name: 'bare fits with errors, 96 tubes', run: () => bare(smallData) }, { name: 'with flags, diagnostics, curves and slope, 96 tubes', run: () => whole(small) },
    { name: 'bare fits, 960 tubes', run: () => bare(largeData) }, { name: 'with flags, diagnostics, curves and slope, 960 tubes', run: () => whole(large) },
  ], { rounds: 15, warm: 12 })
  const ms = rows.map(row => 1e3 * median(row.seconds))
  console.log('\nA series of inversion recoveries, 12 points a tube')
  rows.forEach((row, i) => console.log(`  ${row.name.padEnd(58)} ${(ms[i] ?? Number.NaN).toFixed(2).padStart(8)} ms`))
  console.log(`  whole over bare: ${((ms[1] ?? NaN) / (ms[0] ?? NaN)).toFixed(2)} (asked: at most 3); ten times the tubes: ×${((ms[3] ?? NaN) / (ms[1] ?? NaN)).toFixed(1)} (asked: at most 11)`)
  console.log(`  heap kept by the answer: 96 tubes ${heapOf(() => relaxT1Ir.analyse(small)).toFixed(0)} kB, 960 tubes ${heapOf(() => relaxT1Ir.analyse(large)).toFixed(0)} kB`)
  console.log(`  second opinion: ${secondOpinionCost(smallData).toFixed(2)} ms a tube (asked: at most 1.5)`)
}

/** Heap that an answer keeps, kB; the collector is asked first where the run allows it. */
function heapOf(make: () => unknown): number {
  const collect = (globalThis as { gc?: () => void }).gc
  collect?.()
  const before = process.memoryUsage().heapUsed
  const kept = make()
  collect?.()
  const after = process.memoryUsage().heapUsed
  return kept === null ? Number.NaN : (after - before) / 1024
}
