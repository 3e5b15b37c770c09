import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { fitChallenge, type ChallengePoint } from '#shared/science/kinetics/challenge'
import { arrheniusRatio, eyringRate_per_s } from '#shared/science/kinetics/eyring'
import { halfLife_s, rateOfHalfLife_per_s } from '#shared/science/kinetics/firstOrder'
import { fitFormation, hydroxide_M, timeToYield_s } from '#shared/science/kinetics/formation'
import { zincPhosphate, type ZincAnswer } from '#shared/science/kinetics/zincPhosphate'
import { createRandom } from '#shared/science/random'

interface Figure { value: number, conditions: Record<string, number> }
const published = JSON.parse(readFileSync(new URL('../../fixtures/reference/kinetics/published.json', import.meta.url), 'utf8')) as {
  rates: Record<string, Figure>, acidHalfLife: Record<string, Figure>, eyring: Record<string, Figure>, arrhenius: Record<string, Figure>, zincPhosphate: Record<string, Figure>
}
const zinc = (ratios: readonly (readonly [number, number])[], dia = 0.4, para = 11): ZincAnswer => {
  const answer = zincPhosphate(ratios.map(([time_h, ratio]) => ({ time_h, rate1_per_s: dia + para * ratio, se_per_s: 0.05 })), dia)
  if (!answer.ok) throw new Error(answer.message)
  return answer
}
/** A course that levels off, through the published ratio at 72 h. */
const course = (ratio72: number): (readonly [number, number])[] => [0, 2, 5, 10, 20, 30, 48, 60, 72].map(t => [t, 1 - (1 - ratio72) * (1 - Math.exp(-t / 15)) / (1 - Math.exp(-72 / 15))] as const)

describe('zinc and phosphate', () => {
  it('gives back 0.49 and 0.09 at 72 h with a time to 0.80, and "not reached" for the macrocycle [Laurent et al. 2006; Port et al. 2008, from memory]', () => {
    for (const name of ['GdDTPA', 'GdDTPA-BMA']) {
      const { value } = published.zincPhosphate[`zn_ratio72h_${name}`]!
      const answer = zinc(course(value))
      expect(answer.ratio72!.value).toBeCloseTo(value, 12)
      expect(answer.timeTo080.status).toBe('reached')
    }
    expect(zinc(course(published.zincPhosphate['zn_ratio72h_GdDOTA']!.value)).timeTo080).toEqual({ status: 'notReached', longerThan_h: 72 })
  })

  it('reads between points and never beyond them: no ratio at 72 h from a course of 48 h', () => {
    const short = zinc([[0, 1], [24, 0.9], [48, 0.85]])
    expect(short.ratio72).toBeNull()
    expect(short.timeTo080).toEqual({ status: 'notReached', longerThan_h: 48 })
    expect(zinc([[0, 1], [10, 0.9], [20, 0.7], [80, 0.5]]).timeTo080).toMatchObject({ status: 'reached', time_h: expect.closeTo(15, 9) as number })
  })

  it('takes off the blank, and refuses a course without mixing point or with too little paramagnetic rate', () => {
    const points = [0, 10, 20].map(time_h => ({ time_h, rate1_per_s: 0.5, se_per_s: null }))
    expect(zincPhosphate(points, 0.4)).toMatchObject({ ok: false, reason: 'smallRate' })
    expect(zincPhosphate(points.map(p => ({ ...p, time_h: p.time_h + 1 })), 0.1)).toMatchObject({ ok: false, reason: 'noStart' })
    expect(zincPhosphate(points, NaN)).toMatchObject({ ok: false, reason: 'noBlank' })
  })
})

describe('challenges', () => {
  const random = createRandom('challenge')
  const at = (x: number, intact_percent: number, kind: ChallengePoint['kind'] = '='): ChallengePoint => ({ x, intact_percent, kind, se_percent: 2 })

  it('finds the pH and the ratio at which half is left within three errors, a censored point kept', () => {
    const pH = [1, 2, 2.5, 3, 3.5, 4, 5, 6].map(x => at(x, 100 / (1 + Math.exp(-2 * (x - 3.2))) + 2 * random.normal()))
    const midpoint = fitChallenge([...pH, at(0.5, 2, '<')], 'pH')
    if (!midpoint.ok) throw new Error(midpoint.message)
    expect(midpoint.value.kind).toBe('=')
    expect(Math.abs(midpoint.value.value - 3.2)).toBeLessThan(3 * midpoint.value.se!)
    const ratio = fitChallenge([0.2, 0.5, 1, 2, 4, 8].map(x => at(x, 100 / (1 + (1.5 / x) ** 2) + 2 * random.normal())), 'ratio')
    if (!ratio.ok) throw new Error(ratio.message)
    expect(Math.abs(ratio.value.value - 1.5)).toBeLessThan(3 * ratio.value.se!)
  })

  it('gives a rate where the complex goes, and only an upper bound where all of it stays', () => {
    const goes = fitChallenge([0, 1000, 2000, 4000, 8000].map(t => at(t, 100 * Math.exp(-2e-4 * t) + 2 * random.normal())), 'time_s')
    if (!goes.ok) throw new Error(goes.message)
    expect(goes.value.kind).toBe('=')
    expect(Math.abs(goes.value.value - 2e-4)).toBeLessThan(3 * goes.value.se!)
    const stays = fitChallenge([0, 1000, 2000, 4000, 8000].map(t => at(t, 98, '>')), 'time_s')
    if (!stays.ok) throw new Error(stays.message)
    expect(stays.value.kind).toBe('<')
    expect(stays.value.value).toBeLessThan(2e-5)
  })

  it('refuses percentages that do not change with pH, and two conditions', () => {
    expect(fitChallenge([1, 2, 3, 4].map(x => at(x, 99)), 'pH')).toMatchObject({ ok: false, reason: 'noChange' })
    expect(fitChallenge([at(1, 5), at(2, 90)], 'pH')).toMatchObject({ ok: false, reason: 'tooFewPoints' })
  })
})

describe('formation', () => {
  it('finds k_OH within three errors and keeps the water path as a bound where there is none', () => {
    const random = createRandom('formation')
    const fit = fitFormation([4.5, 5, 5.5, 6, 6.5].map(pH => ({ pH, rate_per_s: 6e6 * hydroxide_M(pH, 13.8) * (1 + 0.03 * random.normal()), se_per_s: null })), 13.8)
    if (!fit.ok) throw new Error(fit.message)
    expect(Math.abs(fit.kOH_per_M_s.value - 6e6)).toBeLessThan(3 * fit.kOH_per_M_s.se!)
    expect(fit.kWater_per_s.kind).toBe('<')
  })

  it('gives the time to 99 % in large excess as ln 100/k, longer without excess, and never for a ligand short of its metal', () => {
    const k = { rate_per_s: 1e-3, reference_M: 0.01 }
    expect(timeToYield_s(k, 1e-9, 0.01, 0.99) / (Math.log(100) / 1e-3)).toBeCloseTo(1, 5)
    expect(timeToYield_s(k, 0.01, 0.01, 0.99) / (99 / 1e-3)).toBeCloseTo(1, 12)
    expect(timeToYield_s(k, 0.01, 0.005, 0.99)).toBe(Infinity)
  })
})

describe('published figures', () => {
  it('give kex of Gd-DTPA and Gd-DOTA from activation enthalpy and entropy within 1 % [Powell et al. 1996]', () => {
    for (const key of ['eyring_GdDTPA', 'eyring_GdDOTA']) {
      const { value, conditions: c } = published.eyring[key]!
      expect(Math.abs(eyringRate_per_s(c.T_K!, c.dH_kJ!, c.dS_J!) / value - 1)).toBeLessThan(0.01)
    }
  })

  it('give 2.55 from 25 to 37 °C at 60 kJ/mol', () => expect(arrheniusRatio(60, 298.15, 310.15)).toBeCloseTo(2.5509, 4))

  it('pair 338, 43 and 3.9 h with their rates within 1 %, in the order DOTA, BT-DO3A, HP-DO3A, open chain far below [Port et al. 2008, from memory]', () => {
    const hours = ['GdDOTA', 'GdBT-DO3A', 'GdHP-DO3A'].map(name => published.acidHalfLife[`thalf_0.1MHCl_${name}`]!).map(f => {
      expect(rateOfHalfLife_per_s(f.value * 3600) / f.conditions['kobs_s-1']!).toBeCloseTo(1, 2)
      return halfLife_s(f.conditions['kobs_s-1']!) / 3600
    })
    expect(hours[0]).toBeGreaterThan(hours[1]!)
    expect(hours[1]).toBeGreaterThan(hours[2]!)
    expect(hours[2]! / (halfLife_s(0.1 * published.rates.k1_GdDTPA!.value) / 3600)).toBeGreaterThan(1000)
  })
})
