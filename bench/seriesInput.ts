import type { AnalysisInput } from '../shared/measurements/types'
import type { FitData } from '../shared/science/least-squares/fitModel'
import type { Model } from '../shared/science/models/define'
import { inversionRecovery3 } from '../shared/science/models/inversionRecovery3'
import { createRandom } from '../shared/science/random'
import { fitTubes } from '../shared/science/relaxometry/tubes'

const TI_S = [0.03, 0.06, 0.11, 0.18, 0.28, 0.42, 0.62, 0.9, 1.3, 2, 3.2, 5]

/** A seeded series: concentrations from 0 to 2 mM, r1 4.2, noise 0.4 %. */
export function makeSeries(tubes: number): AnalysisInput {
  const random = createRandom(`bench series ${tubes}`)
  return {
    kind: 'relax.t1.ir', modelId: 'inversionRecovery3', options: {}, seed: 'bench', exclusions: [],
    conditions: { instrument: 'Bay 3', b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'plasma', timing: 'longTr', signalForm: 'signed', concBasis: 'icp', concScaleError_frac: 0.015 },
    tubes: Array.from({ length: tubes }, (_, i) => {
      const conc_mM = 2 * i / (tubes - 1)
      const t1_s = 1 / (0.5 + 4.2 * conc_mM)
      return {
        tubeNo: i + 1, label: `t${i + 1}`, role: i === 0 ? 'blank' as const : 'sample' as const, conc_mM, concSe_mM: null,
        points: { columns: ['ti_s', 'signal_au'], rows: TI_S.map(ti => [ti, 1000 - 1940 * Math.exp(-ti / t1_s) + 4 * random.normal()]) },
      }
    }),
  }
}

export const tubeData = (input: AnalysisInput): FitData[] => input.tubes.map(tube => ({ x: tube.points.rows.map(row => row[0] ?? Number.NaN), y: tube.points.rows.map(row => row[1] ?? Number.NaN) }))

/** What asking another program costs, ms a tube. */
export function secondOpinionCost(data: readonly FitData[]): number {
  const time = (secondOpinion: boolean): number => {
    const begin = process.cpuUsage()
    fitTubes(inversionRecovery3 as Model, data, 'signed', { secondOpinion })
    const { user, system } = process.cpuUsage(begin)
    return (user + system) / 1e3
  }
  for (let k = 0; k < 3; k++) time(true)
  const runs = Array.from({ length: 5 }, () => time(true) - time(false)).sort((a, b) => a - b)
  return (runs[2] ?? Number.NaN) / data.length
}
