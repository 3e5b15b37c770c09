import { describe, expect, it } from 'vitest'
import { detectionConcentration, resolvingConcentration, tissueZ, type DetectionAgent, type DetectionInput, type DetectionTissue } from '../../../shared/science/exchange/detection'
import { drawDetection, type DetectionErrors } from '../../../shared/science/exchange/detectionDraws'
import { firstReach } from '../../../shared/science/exchange/firstReach'
import { omega1_rad_per_s, protonFraction } from '../../../shared/science/exchange/transferForms'
import { createRandom } from '../../../shared/science/random'

const isFull = process.env.LANTHORN_TEST === 'full'
const agent: DetectionAgent = { shift_ppm: 50, exchange_per_s: 3000, protons: 8, rate1_per_s: 5, rate2_per_s: 150, r1_per_mM_s: 0.005, r2_per_mM_s: 0.02 }
const tissue: DetectionTissue = { rate1_per_s: 0.45, rate2_per_s: 25, macromolecules: { ratio: 0.08, exchange_per_s: 40, t2_s: 1e-5, rate1_per_s: 1 } }
const input: DetectionInput = { agent, tissue, setting: { field_T: 9.4, b1_uT: 10, duration_s: 3, drop_points: 5 } }
const bare: DetectionInput = { agent: { ...agent, shift_ppm: 5e3, r1_per_mM_s: 0, r2_per_mM_s: 0 }, tissue: { rate1_per_s: 0.45, rate2_per_s: 2, macromolecules: null }, setting: { ...input.setting, duration_s: Infinity, b1_uT: 40 } }
const reached = (outcome: ReturnType<typeof detectionConcentration>): number => {
  if (!outcome.ok || outcome.kind !== 'reached') throw new Error(JSON.stringify(outcome))
  return outcome.conc_mM
}

describe('the detection concentration', () => {
  it('is R1w·d/((1 − d)·k·α) as a proton ratio without tissue, relaxivity and direct saturation [rearranged steady state]', () => {
    const alpha = omega1_rad_per_s(40) ** 2 / (omega1_rad_per_s(40) ** 2 + 3000 * 3150)
    const ratio = 0.45 * 0.05 / (0.95 * 3000 * alpha)
    expect(reached(detectionConcentration(bare)) / (ratio / protonFraction(8, 1))).toBeCloseTo(1, 2)
  })
  it('is where the drop of Z is what was asked for, and less anywhere below', () => {
    const conc = reached(detectionConcentration(input))
    const without = tissueZ(input, 0)
    expect(without - tissueZ(input, conc)).toBeCloseTo(0.05, 9)
    for (const share of [0.1, 0.5, 0.9, 0.99]) expect(without - tissueZ(input, share * conc)).toBeLessThan(0.05)
  })
  it('is higher in tissue with macromolecules, with a relaxivity r1 and (without macromolecules) with less B1, and lower with r2', () => {
    const conc = reached(detectionConcentration(input))
    expect(reached(detectionConcentration({ ...input, tissue: { ...tissue, macromolecules: null } }))).toBeLessThan(conc)
    expect(reached(detectionConcentration({ ...input, agent: { ...agent, r1_per_mM_s: 0.015 } }))).toBeGreaterThan(conc)
    // With macromolecules less B1 can be better: they lose more by it than the agent.
    expect(reached(detectionConcentration({ ...bare, setting: { ...bare.setting, b1_uT: 7 } }))).toBeGreaterThan(reached(detectionConcentration(bare)))
    expect(reached(detectionConcentration({ ...input, agent: { ...agent, r2_per_mM_s: 5 } }))).toBeLessThan(conc)
  })
  it('is not reached where the agent\'s own r1 fills what saturation empties: the most it comes to is told', () => {
    const outcome = detectionConcentration({ ...input, agent: { ...agent, exchange_per_s: 300, r1_per_mM_s: 0.6 } })
    if (!outcome.ok || outcome.kind !== 'notReached') throw new Error('reached')
    expect(outcome.highestDrop_points).toBeLessThan(5)
    expect(outcome.at_mM).toBeLessThanOrEqual(100)
  })
  it('finds a maximum between two concentrations of the grid, and the first crossing before it [parabola]', () => {
    const parabola = (c: number) => 1 - (c - 3.1) ** 2
    const at = firstReach(parabola, 0.9999, 100)
    expect(at.kind === 'reached' && at.conc_mM).toBeCloseTo(3.09, 10)
    const over = firstReach(parabola, 1.0001, 100)
    expect(over.kind).toBe('notReached')
    if (over.kind === 'notReached') expect(over.highest).toBeCloseTo(1, 10)
    expect(firstReach(c => c / (1 + c), 0.5, 0.9).kind).toBe('notReached')
  })
  it('resolves two rates of exchange where their spectra differ by the points asked for', () => {
    const conc = reached(resolvingConcentration(input, { exchange_per_s: 400 }))
    const other = { ...input, agent: { ...agent, exchange_per_s: 400 } }
    expect(Math.abs(tissueZ(input, conc) - tissueZ(other, conc))).toBeCloseTo(0.05, 9)
  })
  it.each([
    ['badProtons', { agent: { ...agent, protons: 0 } }], ['badRelaxivity', { agent: { ...agent, r1_per_mM_s: NaN } }], ['badSystem', { agent: { ...agent, exchange_per_s: -1 } }],
    ['badTissue', { tissue: { ...tissue, macromolecules: { ...tissue.macromolecules!, t2_s: 0 } } }], ['badSystem', { tissue: { ...tissue, rate1_per_s: 0 } }],
    ['noB1', { setting: { ...input.setting, b1_uT: 0 } }], ['badDrop', { setting: { ...input.setting, drop_points: 0 } }], ['badHighest', { setting: { ...input.setting, highest_mM: Infinity } }],
    ['badOffset', { setting: { ...input.setting, offset_ppm: NaN } }],
  ] as const)('refuses %s', (reason, change) => {
    const outcome = detectionConcentration({ ...input, ...change })
    expect(!outcome.ok && outcome.reason).toBe(reason)
  })
})

describe('draws of the detection concentration', () => {
  const errors: DetectionErrors = {
    agent: { exchange_per_s: 300, r1_per_mM_s: 0.002, r2_per_mM_s: 0.01, rate2_per_s: 30, shift_ppm: 0.3 }, tissueRate1_per_s: 0.05, tissueRate2_per_s: 3, macromolecules: { ratio: 0.01, exchange_per_s: 5 }, b1_frac: 0.05,
  }
  const drawn = (of: DetectionInput, some: DetectionErrors, draws: number, seed = 'detection') => {
    const outcome = drawDetection(of, some, { seed, draws })
    if (!outcome.ok) throw new Error(outcome.message)
    return outcome
  }
  it('are those of full solves within 1 %, of 200 agents all over the place, reached or not [full solves]', () => {
    const random = createRandom('detection agents')
    const between = (low: number, high: number) => low * Math.exp(random.uniform() * Math.log(high / low))
    let notReached = 0
    let compared = 0
    for (let i = 0; i < (isFull ? 2000 : 200); i++) {
      const one: DetectionInput = {
        agent: {
          shift_ppm: (random.uniform() < 0.5 ? -1 : 1) * between(2, 100), exchange_per_s: between(50, 3e4), protons: Math.ceil(6 * random.uniform()), rate1_per_s: between(1, 50), rate2_per_s: between(20, 2000),
          r1_per_mM_s: between(0.002, 0.05), r2_per_mM_s: between(0.005, 0.5),
        },
        tissue: { rate1_per_s: between(0.3, 1.5), rate2_per_s: between(8, 60), macromolecules: random.uniform() < 0.8 ? { ratio: between(0.02, 0.15), exchange_per_s: between(15, 60), t2_s: 1e-5, rate1_per_s: 1 } : null },
        setting: { field_T: 9.4, b1_uT: between(1, 20), duration_s: between(0.5, 6), drop_points: between(1, 10) },
      }
      // An error so small that the one draw is the point itself.
      const { point, conc_mM: [conc] } = drawn(one, {}, 1)
      if (!point.ok) throw new Error('refused')
      if (point.kind === 'notReached') {
        notReached++
        expect(conc).toBe(Infinity)
      }
      else {
        compared++
        expect(Math.abs(conc! / point.conc_mM - 1), JSON.stringify(one)).toBeLessThan(0.01)
      }
    }
    expect(notReached).toBeGreaterThan(10)
    expect(compared).toBeGreaterThan(80)
  })
  it('spread by first order for small errors [error propagation by differences]', () => {
    const some: DetectionErrors = { agent: { exchange_per_s: 30 }, tissueRate1_per_s: 0.005, b1_frac: 0.005 }
    const at = (change: (of: DetectionInput) => DetectionInput) => Math.log(reached(detectionConcentration(change(input))))
    const middle = at(x => x)
    const parts = [
      at(x => ({ ...x, agent: { ...x.agent, exchange_per_s: 3030 } })), at(x => ({ ...x, tissue: { ...x.tissue, rate1_per_s: 0.455 } })), at(x => ({ ...x, setting: { ...x.setting, b1_uT: 10.05 } })),
    ].map(one => one - middle)
    const { logSe, quantiles_mM: { median } } = drawn(input, some, 1000)
    expect(logSe! / Math.hypot(...parts)).toBeGreaterThan(0.92)
    expect(logSe! / Math.hypot(...parts)).toBeLessThan(1.08)
    expect(median! / reached(detectionConcentration(input))).toBeCloseTo(1, 2)
  })
  it('give the same bits for the same seed, others for another, and no number moves with the count', () => {
    const once = drawn(input, errors, 64)
    expect(drawn(input, errors, 64).conc_mM).toEqual(once.conc_mM)
    expect(drawn(input, errors, 32).conc_mM).toEqual(once.conc_mM.slice(0, 32))
    expect(drawn(input, errors, 64, 'another').conc_mM).not.toEqual(once.conc_mM)
    expect(once.reached_frac).toBe(1)
    expect(once.quantiles_mM.low!).toBeLessThan(once.quantiles_mM.high!)
  })
  it('leave a limit open where so many draws do not reach the drop', () => {
    const weak = { ...input, setting: { ...input.setting, highest_mM: reached(detectionConcentration(input)) } }
    const { reached_frac, quantiles_mM } = drawn(weak, errors, 400)
    expect(reached_frac).toBeGreaterThan(0.2)
    expect(reached_frac).toBeLessThan(0.8)
    expect(quantiles_mM.low).not.toBeNull()
    expect(quantiles_mM.high).toBeNull()
  })
  it('refuse errors below zero', () => {
    const outcome = drawDetection(input, { b1_frac: -1 }, { seed: 1 })
    expect(!outcome.ok && outcome.reason).toBe('badError')
  })
})
