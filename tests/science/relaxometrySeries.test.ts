import { describe, expect, it } from 'vitest'
import { fitModel } from '../../shared/science/least-squares/fitModel'
import { bindingIsotherm } from '../../shared/science/models/bindingIsotherm'
import type { Model } from '../../shared/science/models/define'
import { createRandom } from '../../shared/science/random'
import { controlChart } from '../../shared/science/relaxometry/controlChart'
import { diluteEach, diluteInSeries, planDilution, weighedStock_mM } from '../../shared/science/relaxometry/dilution'
import { testLackOfFit } from '../../shared/science/relaxometry/lackOfFit'
import { bootstrapRatio, type PairedTube } from '../../shared/science/relaxometry/ratioBootstrap'

describe('lack of fit', () => {
  it('is what the sums of squares give by hand', () => {
    // Pairs (1, 1 and 3), (2, 2 and 4), (3, 9 and 11): means 2, 3, 10; pure error 2 + 2 + 2 = 6 with 3 degrees of freedom. Line −3 + 4x: 1, 5, 9; lack 2·(1 + 4 + 1) = 12 with 1.
    const found = testLackOfFit([1, 1, 2, 2, 3, 3], [1, 3, 2, 4, 9, 11], null, 18)!
    expect([found.f, found.dof1, found.dof2]).toEqual([6, 1, 3])
    expect(found.p).toBeCloseTo(0.0917, 3)
  })
  it('needs repeats and three concentrations', () => {
    expect(testLackOfFit([0, 1, 2, 3], [1, 2, 3, 4], null, 0.1)).toBeNull()
    expect(testLackOfFit([0, 0, 1, 1], [1, 1.1, 2, 2.1], null, 0.1)).toBeNull()
  })
})

describe('r2/r1 of tubes measured both ways', () => {
  const CONCS = [0, 0.2, 0.4, 0.7, 1, 1.5, 2]
  function tubes(seed: string, { own = 0, scale = 1, noise = 0.005 } = {}): PairedTube[] {
    const random = createRandom(seed)
    return CONCS.map((conc_mM) => {
      const true_mM = conc_mM * scale * (1 + own * random.normal())
      const [rate1, rate2] = [0.4 + 4 * true_mM, 6 + 5 * true_mM]
      return { conc_mM, rate1_per_s: rate1 * (1 + noise * random.normal()), rate1Se_per_s: noise * rate1, rate2_per_s: rate2 * (1 + noise * random.normal()), rate2Se_per_s: noise * rate2 }
    })
  }
  it('is the same for the same seed, near the truth, and knows nothing of a common concentration error', () => {
    const plain = bootstrapRatio(tubes('ratio'), { seed: 'a' })!
    expect(bootstrapRatio(tubes('ratio'), { seed: 'a' })).toEqual(plain)
    expect(Math.abs(plain.value - 1.25)).toBeLessThan(3 * plain.se!)
    expect(bootstrapRatio(tubes('ratio', { scale: 1.05 }), { seed: 'a' })!.value).toBeCloseTo(plain.value, 1)
  })
  it('has the smaller error that shared pipetting errors leave: the slopes move together [first-order propagation]', () => {
    const found = bootstrapRatio(tubes('pipetting', { own: 0.03, noise: 0.002 }), { seed: 'b' })!
    expect(found.correlation).toBeGreaterThan(0.5)
    const independent = found.value * Math.hypot(0.03, 0.03) / Math.sqrt(CONCS.length)
    expect(found.se!).toBeLessThan(0.7 * independent)
  })
  it.each([5, 7, 12])('covers the truth in 94 to 98.5 % with %i tubes, and has the error that the draws of nature scatter by [simulation]', (count) => {
    const concs = Array.from({ length: count }, (_, i) => 2 * (i / (count - 1)) ** 1.5)
    const tries = process.env.LANTHORN_TEST === 'full' ? 3000 : 400
    const random = createRandom(`ratio ${count}`)
    let inside = 0
    const [values, errors]: [number[], number[]] = [[], []]
    for (let k = 0; k < tries; k++) {
      const factor = 1 + 0.02 * random.normal()
      const measured = concs.map((conc_mM): PairedTube => {
        const true_mM = conc_mM * factor * (1 + 0.01 * random.normal())
        const [rate1, rate2] = [0.4 + 4 * true_mM, 6 + 5 * true_mM]
        return { conc_mM, rate1_per_s: rate1 * (1 + 0.004 * random.normal()), rate1Se_per_s: 0.004 * rate1, rate2_per_s: rate2 * (1 + 0.004 * random.normal()), rate2Se_per_s: 0.004 * rate2 }
      })
      const found = bootstrapRatio(measured, { seed: `c${k}`, draws: 300 })!
      if (found.interval![0] <= 1.25 && 1.25 <= found.interval![1]) inside++
      values.push(found.value)
      errors.push(found.se! ** 2)
    }
    // In the quick run the band is widened by what chance does to so few tries (4 standard deviations).
    const chance = process.env.LANTHORN_TEST === 'full' ? 0 : 4 * Math.sqrt(0.95 * 0.05 / tries)
    expect(inside / tries).toBeGreaterThan(0.94 - chance)
    expect(inside / tries).toBeLessThan(0.985 + chance)
    const mean = values.reduce((sum, value) => sum + value, 0) / tries
    const variance = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (tries - 1)
    expect(Math.abs(Math.sqrt(errors.reduce((sum, value) => sum + value, 0) / tries / variance) - 1)).toBeLessThan(0.12)
  }, 120_000)
  it('is not told from three tubes or without a slope', () => {
    expect(bootstrapRatio(tubes('few').slice(0, 3), { seed: 'd' })).toBeNull()
    expect(bootstrapRatio(tubes('flat').map(tube => ({ ...tube, conc_mM: 1 })), { seed: 'd' })).toBeNull()
  })
})

describe('binding isotherm', () => {
  it('gives back free and bound relaxivity and K_d within three standard errors [forward model]', () => {
    const model = bindingIsotherm as Model
    const { x, settings, truth } = model.example
    const random = createRandom('binding')
    const y = x.map(conc => model.evaluate(conc, truth, settings) * (1 + 0.004 * random.normal()))
    const fit = fitModel(model, { x, y, sigma: y.map(rate => 0.004 * rate) }, { settings })
    if (!fit.ok) throw new Error(fit.message)
    for (const { name, value, se } of fit.parameters) expect(Math.abs(value - truth[name]!)).toBeLessThan(3.2 * se!)
  })
  it('is the straight line r_free·c without protein, and r_bound·c where all is bound [limits]', () => {
    const values = { rateDia_per_s: 0.5, free_per_mM_s: 4, bound_per_mM_s: 30, kd_mM: 1e-6 }
    expect(bindingIsotherm.evaluate(0.1, values, { protein_mM: 50, sites: 1 })).toBeCloseTo(0.5 + 3, 5)
    expect(bindingIsotherm.evaluate(2, { ...values, kd_mM: 1e4 }, { protein_mM: 0.01, sites: 1 })).toBeCloseTo(0.5 + 8, 3)
  })
})

describe('control chart', () => {
  it('has centre and SD of its base sessions, each judged without itself [by hand]', () => {
    const chart = controlChart([10, 12, 11, 9, 13, 20])
    expect(chart.centre).toBeCloseTo(12.5, 12)
    // Without the last: mean 11, SD √2.5.
    expect(chart.sessions[5]).toMatchObject({ isBase: true, isOutside: true })
    expect(chart.sessions[5]!.z).toBeCloseTo(9 / Math.sqrt(2.5), 12)
  })
  it('judges nothing from fewer than five other sessions, and later sessions against the first twenty', () => {
    expect(controlChart([1, 2, 3, 4]).centre).toBeNull()
    expect(controlChart([1, 2, 3, 4, 5]).sessions.every(one => one.z === null)).toBe(true)
    const values = Array.from({ length: 25 }, (_, i) => 100 + (i % 2 ? 1 : -1))
    const { sessions, centre } = controlChart([...values.slice(0, 20), 104, ...values.slice(21)])
    expect(centre).toBe(100)
    expect(sessions[20]).toMatchObject({ isBase: false, isOutside: true })
    expect(sessions[21]!.isOutside).toBe(false)
  })
})

describe('stock and dilutions', () => {
  it('a weighed stock has the errors of mass, purity, water and volume in quadrature [JCGM 100:2008, 5.1.2; by hand]', () => {
    const made = weighedStock_mM({ mass_mg: 60, massSe_mg: 0.3, molarMass_g_per_mol: 600, purity_frac: 0.96, puritySe_frac: 0.0096, water_frac: 0.04, waterSe_frac: 0.0048, volume_ml: 10, volumeSe_ml: 0.02 })
    expect(made.value).toBeCloseTo(9.216, 10)
    expect(made.se / made.value).toBeCloseTo(Math.hypot(0.005, 0.01, 0.005, 0.002), 10)
  })
  it('propagates as many simulated dilutions scatter [Monte Carlo]', () => {
    const pipettes = { forStock: { calibration_frac: 0.01, repeat_frac: 0.004 }, forDiluent: { calibration_frac: 0.006, repeat_frac: 0.003 }, samePipette: false }
    const dilutions = [planDilution(10, 1, 1000)!, planDilution(10, 5, 1000)!]
    const stated = diluteEach({ value: 10, se: 0.1 }, dilutions, pipettes)
    const random = createRandom('dilution')
    const n = 20_000
    const logs = dilutions.map(() => [0, 0])
    for (let k = 0; k < n; k++) {
      const stock = 10 + 0.1 * random.normal()
      const [fv, fd] = [1 + 0.01 * random.normal(), 1 + 0.006 * random.normal()]
      dilutions.forEach(({ stock_uL, diluent_uL }, i) => {
        const v = stock_uL * fv * (1 + 0.004 * random.normal())
        const d = diluent_uL * fd * (1 + 0.003 * random.normal())
        const off = Math.log(stock * v / (v + d) / stated.tubes[i]!.conc_mM)
        logs[i]![0]! += off
        logs[i]![1]! += off * off
      })
    }
    logs.forEach(([sum, square], i) => {
      const simulated = Math.sqrt(square! / n - (sum! / n) ** 2)
      const whole = Math.hypot(stated.scale_frac, stated.tubes[i]!.ownSe_mM / stated.tubes[i]!.conc_mM)
      expect(whole / simulated).toBeGreaterThan(0.97)
      expect(whole / simulated).toBeLessThan(1.03)
    })
  })
  it('calibration cancels where one pipette delivers both, and a serial dilution hands its errors on', () => {
    const one = { calibration_frac: 0.02, repeat_frac: 0 }
    const same = diluteEach({ value: 10, se: 0 }, [{ stock_uL: 100, diluent_uL: 900 }], { forStock: one, forDiluent: one, samePipette: true })
    expect([same.scale_frac, same.tubes[0]!.ownSe_mM]).toEqual([0, 0])
    const half = { stock_uL: 500, diluent_uL: 500 }
    const pipettes = { forStock: { calibration_frac: 0, repeat_frac: 0.01 }, forDiluent: { calibration_frac: 0, repeat_frac: 0.01 }, samePipette: true }
    const serial = diluteInSeries({ value: 8, se: 0.08 }, [half, half, half], pipettes)
    expect(serial.tubes.map(tube => tube.conc_mM)).toEqual([4, 2, 1])
    expect(serial.tubes[2]!.ownSe_mM / 1).toBeCloseTo(Math.sqrt(3) * serial.tubes[0]!.ownSe_mM / 4, 12)
    expect(serial.scale_frac).toBeCloseTo(0.01, 12)
  })
  it('plans no tube stronger than its stock', () => {
    expect(planDilution(1, 2, 1000)).toBeNull()
    expect(planDilution(10, 0.5, 1000)).toEqual({ stock_uL: 50, diluent_uL: 950 })
  })
})
