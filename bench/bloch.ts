import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { PROTON_GAMMA_rad_per_s_T } from '../shared/science/constants'
import type { DetectionInput } from '../shared/science/exchange/detection'
import { DETECTION_DRAWS, drawDetection, type DetectionErrors } from '../shared/science/exchange/detectionDraws'
import { fitSeries } from '../shared/science/exchange/fitSeries'
import type { Block, PoolSystem } from '../shared/science/exchange/poolSystem'
import type { Quantity, SeriesModel, SeriesSpectrum } from '../shared/science/exchange/seriesTypes'
import { cwSpectrum } from '../shared/science/exchange/spectrum'
import { createRandom } from '../shared/science/random'
import { median, takeTurns } from './rounds'

const axis = (range: number, count: number) => Array.from({ length: count }, (_, i) => -range + (2 * range * i) / (count - 1))
const water = { rate1_per_s: 0.4, rate2_per_s: 5 }
const SPECTRA: Readonly<Record<string, { system: PoolSystem, block: Block, offsets_ppm: number[], goals: { loop: number, batched: number } }>> = {
  '2 pools, 3.5 ppm': {
    system: { field_T: 9.4, water, solutes: [{ shift_ppm: 3.5, rate1_per_s: 1, rate2_per_s: 50, exchange_per_s: 150, ratio: 1e-3 }] },
    block: { b1_uT: 2, duration_s: 3 }, offsets_ppm: axis(6, 101), goals: { loop: 25, batched: 18 },
  },
  '2 pools, 50 ppm': {
    system: { field_T: 9.4, water, solutes: [{ shift_ppm: 50, rate1_per_s: 5, rate2_per_s: 200, exchange_per_s: 6000, ratio: 5e-4 }] },
    block: { b1_uT: 15, duration_s: 4 }, offsets_ppm: axis(80, 101), goals: { loop: 25, batched: 18 },
  },
  '3 pools': {
    system: {
      field_T: 9.4, water: { ...water, rate2_per_s: 16 },
      solutes: [{ shift_ppm: 4.2, rate1_per_s: 1, rate2_per_s: 80, exchange_per_s: 400, ratio: 1.1e-3 }, { shift_ppm: 5.6, rate1_per_s: 1, rate2_per_s: 80, exchange_per_s: 1500, ratio: 1.1e-3 }],
    },
    block: { b1_uT: 2.5, duration_s: 5 }, offsets_ppm: axis(9, 101), goals: { loop: 9, batched: 7 },
  },
}
const REPEATS = 60
const B1_UT = [0.5, 1.2, 2.5, 5]
const CONC_MM = 20
const FIT_GOAL = 20
const DETECTION: DetectionInput = {
  agent: { shift_ppm: 50, exchange_per_s: 3000, protons: 8, rate1_per_s: 5, rate2_per_s: 150, r1_per_mM_s: 0.005, r2_per_mM_s: 0.02 },
  tissue: { rate1_per_s: 0.45, rate2_per_s: 25, macromolecules: { ratio: 0.08, exchange_per_s: 40, t2_s: 1e-5, rate1_per_s: 1 } },
  setting: { field_T: 9.4, b1_uT: 10, duration_s: 3, drop_points: 5 },
}
const DETECTION_ERRORS: DetectionErrors = {
  agent: { exchange_per_s: 300, r1_per_mM_s: 0.002, r2_per_mM_s: 0.01, rate2_per_s: 30, shift_ppm: 0.3 }, tissueRate1_per_s: 0.05, tissueRate2_per_s: 3, macromolecules: { ratio: 0.01, exchange_per_s: 5 }, b1_frac: 0.05,
}

/** Spectra before the steady state, and a fit of three pools to 4 B1 × 67 offsets with 7 free parameters, draws of a detection concentration; the first two against scipy's matrix exponential and least_squares over it. */
export function run(): void {
  const series = makeSeries()
  const scipy = spawnSync(process.env.LANTHORN_PYTHON ?? 'python3', [fileURLToPath(new URL('./scipy_bloch.py', import.meta.url))], {
    encoding: 'utf8', maxBuffer: 1 << 26, env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' },
    input: JSON.stringify({ gamma_rad_per_s_uT: PROTON_GAMMA_rad_per_s_T * 1e-6, spectra: SPECTRA, fit: series.theirs }),
  })
  const theirs = scipy.status === 0 ? JSON.parse(scipy.stdout) as { spectra: Record<string, { seconds: number[], answer: number }>, fit: Record<'loop' | 'batched', { seconds: number[], answer: number, cost: number, evaluations: number }> } : null
  if (theirs === null) console.log('scipy is not installed (package python3-scipy): left out.')

  console.log('\nBloch–McConnell, 101 offsets, constant irradiation, not steady')
  for (const [name, { system, block, offsets_ppm, goals }] of Object.entries(SPECTRA)) {
    const out = new Float64Array(offsets_ppm.length)
    const [ours] = takeTurns([{ name, run: () => {
      for (let k = 0; k < REPEATS; k++) cwSpectrum(system, block, offsets_ppm, out)
      return out.reduce((sum, z) => sum + z, 0)
    } }], { rounds: 15, warm: 15 })
    const seconds = median(ours!.seconds) / REPEATS
    const ratios = (['loop', 'batched'] as const).map((way) => {
      const one = theirs?.spectra[`${name} ${way}`]
      return one ? `  ${way} ×${(median(one.seconds) / seconds).toFixed(1)} (asked: ${goals[way]}), sums differ by ${Math.abs(one.answer - ours!.answer).toExponential(1)}` : ''
    })
    console.log(`  ${name.padEnd(20)} ${(1 / seconds).toFixed(0).padStart(6)} a second${ratios.join('')}`)
  }

  const [ours] = takeTurns([{ name: 'fit', run: () => series.fit() }], { rounds: 7, warm: 4 })
  const [found] = takeTurns([{ name: 'fit without starts', run: () => series.fitWithoutStart() }], { rounds: 5, warm: 2 })
  console.log(`Global fit, 3 pools, 4 B1 × 67 offsets, 7 parameters, errors included\n  ours, start given ${(1e3 * median(ours!.seconds)).toFixed(0)} ms, k ${ours!.answer.toFixed(4)} s⁻¹; starts found ${(1e3 * median(found!.seconds)).toFixed(0)} ms`)
  for (const way of ['loop', 'batched'] as const) {
    const one = theirs?.fit[way]
    if (one) console.log(`  scipy least_squares over expm, ${way} ${(1e3 * median(one.seconds)).toFixed(0)} ms, k ${one.answer.toFixed(4)}, ${one.evaluations} steps   ×${(median(one.seconds) / median(ours!.seconds)).toFixed(1)} (asked: ${FIT_GOAL})`)
  }

  const detect = () => {
    const done = drawDetection(DETECTION, DETECTION_ERRORS, { seed: 'bench' })
    if (!done.ok) throw new Error(done.message)
    return done.quantiles_mM.median ?? Number.NaN
  }
  const [cold] = takeTurns([{ name: 'detection', run: detect }], { rounds: 1, warm: 0 })
  const [warm] = takeTurns([{ name: 'detection', run: detect }], { rounds: 9, warm: 2 })
  console.log(`Detection concentration, ${DETECTION_DRAWS} draws, every one solved: ${(1e3 * median(warm!.seconds)).toFixed(0)} ms, the first time ${(1e3 * median(cold!.seconds)).toFixed(0)} ms (asked: at most 500), median ${warm!.answer.toPrecision(6)} mM`)

  const simulator = SPECTRA['3 pools']!
  const offsets = axis(9, 201)
  const redraw = () => B1_UT.reduce((sum, b1_uT) => sum + cwSpectrum(simulator.system, { b1_uT, duration_s: 5 }, offsets)[100]!, 0)
  const [page] = takeTurns([{ name: 'simulator', run: redraw }], { rounds: 31, warm: 10 })
  console.log(`Simulator, 3 pools × 4 B1 × 201 offsets: ${(1e3 * median(page!.seconds)).toFixed(1)} ms in Node (asked: at most 8 in a browser)`)
}

function makeSeries() {
  const { system } = SPECTRA['3 pools']!
  const random = createRandom('bench bloch')
  const offsets_ppm = axis(9, 67)
  const duration_s = 3
  const spectra = B1_UT.map((b1_uT): SeriesSpectrum => ({ tube: 0, b1_uT, duration_s, offsets_ppm, z: Array.from(cwSpectrum(system, { b1_uT, duration_s }, offsets_ppm), z => z + 0.003 * random.normal()) }))
  const start = { rate2_per_s: 10, shifts: [4, 5.8], exchange: [200, 800], ratio_per_mM: [1e-4, 3e-5] }
  const fitted = (value: number, isGiven: boolean): Quantity => isGiven ? { kind: 'fitted', start: value } : { kind: 'fitted' }
  const held = (value: number): Quantity => ({ kind: 'held', value })
  const model = (isGiven: boolean): SeriesModel => ({
    field_T: system.field_T, water: { rate1_per_s: held(system.water.rate1_per_s), rate2_per_s: fitted(start.rate2_per_s, isGiven), shift_ppm: held(0) },
    pools: system.solutes.map((one, s) => ({
      label: `pool ${s + 1}`, shift_ppm: fitted(start.shifts[s]!, isGiven), exchange_per_s: fitted(start.exchange[s]!, isGiven), rate1_per_s: held(one.rate1_per_s), rate2_per_s: held(one.rate2_per_s),
      ratio_per_mM: fitted(start.ratio_per_mM[s]!, isGiven),
    })),
  })
  const fit = (isGiven: boolean) => {
    const done = fitSeries(model(isGiven), [{ conc_mM: CONC_MM, b1Se_frac: 0.03 }], spectra)
    if (!done.ok) throw new Error(done.message)
    return done.parameters.find(one => one.name === 'exchange_per_s')?.value ?? Number.NaN
  }
  const log = Math.log
  return {
    fit: () => fit(true), fitWithoutStart: () => fit(false),
    theirs: {
      system, offsets_ppm, duration_s, b1_uT: B1_UT, z: spectra.map(one => one.z),
      start: [log(start.rate2_per_s), ...[0, 1].flatMap(s => [start.shifts[s], log(start.exchange[s]!), log(start.ratio_per_mM[s]! * CONC_MM)])],
    },
  }
}
