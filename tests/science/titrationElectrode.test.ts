import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { calibrateElectrode, type CalibrationRun } from '#shared/science/titration/calibrate'
import { layOut, type VolumetricCurve } from '#shared/science/titration/curves'
import { nernstSlope_mV, pcHFromReading, readingAt, type Electrode } from '#shared/science/titration/electrode'
import { carbonateFromEnds, granEnd } from '#shared/science/titration/gran'
import { refineConstants, type TitrationSystem } from '#shared/science/titration/refine'

const { electrode: stored } = JSON.parse(readFileSync(new URL('../../fixtures/reference/titration/curves.json', import.meta.url), 'utf8')) as {
  electrode: CalibrationRun & { true: { e0_mV: number, slope_mV: number, base_M: number, pKw: number } }
}
function calibrated(run: CalibrationRun) {
  const answer = calibrateElectrode(run, 14)
  if (!answer.ok) throw new Error(answer.message)
  return answer
}

describe('electrode', () => {
  it('has a slope of 59.16 mV per decade at 25 °C and 61.54 at 37 °C [Nernst]', () => {
    expect(nernstSlope_mV(298.15)).toBeCloseTo(59.16, 2)
    expect(nernstSlope_mV(310.15)).toBeCloseTo(61.54, 2)
  })

  it('turns its own reading back into pH from 0 to 14, junction terms included', () => {
    const electrode: Electrode = { e0_mV: 400, slope_mV: 59, junctionAcid_mV_per_M: -60, junctionBase_mV_per_M: 30, pKw: 13.78 }
    for (let pcH = 0.5; pcH <= 13.5; pcH += 0.5) expect(pcHFromReading(electrode, readingAt(electrode, -pcH * Math.LN10).reading_mV)).toBeCloseTo(pcH, 9)
    expect(pcHFromReading(electrode, 5000)).toBeNaN()
  })

  it('is found within three standard errors from a run of strong acid and base [independent script]', () => {
    const found = calibrated(stored)
    const { true: truth } = stored
    const near = (value: number, exact: number, se: number | null) => {
      expect(se).toBeGreaterThan(0)
      expect(Math.abs(value - exact)).toBeLessThan(3 * se!)
    }
    near(found.electrode.e0_mV, truth.e0_mV, found.se.e0_mV)
    near(found.electrode.slope_mV, truth.slope_mV, found.se.slope_mV)
    near(found.electrode.pKw, truth.pKw, found.se.pKw)
    near(stored.acid_mmol / found.base_M, stored.acid_mmol / truth.base_M, found.se.end_mL)
    expect(found.se.slope_mV).toBeLessThan(0.2)
    expect(found.reducedChi2).toBeLessThan(2)
    expect(found.junctionP).toBeGreaterThan(0.01)
    expect(found.electrode.junctionAcid_mV_per_M).toBe(0)
  })

  it('takes junction terms in where the readings need them', () => {
    const bent = { ...stored, acid_mmol: 2.512, vessel_mL: 50 }
    const truth: Electrode = { e0_mV: 400, slope_mV: 59.1, junctionAcid_mV_per_M: -70, junctionBase_mV_per_M: 0, pKw: 13.78 }
    const volumes_mL = Array.from({ length: 40 }, (_, i) => 0.1 + 1.0 * i)
    const readings_mV = volumes_mL.map((v, i) => {
      const total = (bent.acid_mmol - 0.1 * v) / (bent.vessel_mL + v)
      const root = Math.sqrt(total * total + 4e-14 * 10 ** 0.22)
      const h = total >= 0 ? (total + root) / 2 : 2e-14 * 10 ** 0.22 / (root - total)
      return readingAt(truth, Math.log(h)).reading_mV + (i % 2 ? 0.05 : -0.05)
    })
    const found = calibrated({ ...bent, volumes_mL, readings_mV })
    expect(found.junctionP).toBeLessThan(0.01)
    expect(Math.abs(found.electrode.junctionAcid_mV_per_M + 70)).toBeLessThan(3 * found.se.junctionAcid_mV_per_M!)
  })

  it('flags a slope of 90 % and holds pKw where there is no alkaline branch', () => {
    const few = stored.volumes_mL.filter(v => v < 2.9).length
    const found = calibrated({ ...stored, volumes_mL: stored.volumes_mL.slice(0, few), readings_mV: stored.readings_mV.slice(0, few).map(e => 0.9 * e) })
    expect(found.se.pKw).toBeNull()
    expect(found.warnings.join(' ')).toMatch(/slope.*pKw was held/s)
  })

  it.each([
    ['five points', { volumes_mL: [1, 2, 3, 4, 5], readings_mV: [1, 2, 3, 4, 5] }],
    ['volumes that fall', { volumes_mL: [...stored.volumes_mL].reverse() }],
    ['a reading that is missing', { readings_mV: stored.readings_mV.slice(1) }],
    ['a temperature in °C', { temperature_K: 25 }],
    ['no acid', { acid_mmol: 0 }],
  ])('refuses %s and says what would be accepted', (_, change) => {
    const answer = calibrateElectrode({ ...stored, ...change }, 13.78)
    expect(answer).toMatchObject({ ok: false, reason: 'badRun' })
    if (!answer.ok) expect(answer.accepted.length).toBeGreaterThan(5)
  })
})

describe('Gran ends', () => {
  it('meet the amount of acid over the titre from both branches [Gran 1952]', () => {
    const exact = stored.acid_mmol / stored.true.base_M
    for (const branch of ['acid', 'base'] as const) {
      const end = granEnd(stored, stored.true.slope_mV, branch)!
      expect(Math.abs(end.end_mL - exact)).toBeLessThan(Math.max(4 * end.se_mL!, 0.002))
      expect(end.se_mL).toBeLessThan(0.01)
    }
  })

  it('give the carbonate of the base by their difference [alkalinity: two protons each]', () => {
    // 0.1 M hydroxide with 0.002 M carbonate: 1 mmol of acid meets 0.104 M in the acid branch and 0.1 M in the alkaline one
    expect(carbonateFromEnds(1, 1 / 0.104, 10)).toBeCloseTo(0.002, 12)
    expect(granEnd({ ...stored, volumes_mL: [1, 2], readings_mV: [1, 2] }, 59, 'acid')).toBeNull()
  })
})

describe('titration input', () => {
  const curve: VolumetricCurve = { kind: 'volumetric', label: 'A', vessel_mL: 50, initial_mmol: { L: 0.1, H: 0.2 }, titrant_M: { H: -0.1 }, volumes_mL: [0.5, 1, 1.5, 2], readings: [3, 4, 6, 9], sigma_reading: 0.01, sigma_mL: 0.002 }
  const system: TitrationSystem = { components: ['L', 'H'], refine: ['HL'], species: [{ name: 'OH', stoichiometry: { H: -1 }, logBeta: -13.8 }, { name: 'HL', stoichiometry: { L: 1, H: 1 }, logBeta: 8 }] }

  it.each<[string, Partial<VolumetricCurve>, string]>([
    ['a pH of 15', { readings: [3, 4, 6, 15] }, 'outOfDomain'], ['a negative volume', { volumes_mL: [-1, 1, 2, 3] }, 'outOfDomain'],
    ['a negative total', { initial_mmol: { L: -0.1, H: 0.2 } }, 'outOfDomain'], ['an unknown component', { initial_mmol: { L: 0.1, M: 0.1, H: 0.2 } }, 'unknownComponent'],
    ['a missing reading', { readings: [3, 4] }, 'lengthMismatch'], ['no error of a reading', { sigma_reading: 0 }, 'badSigma'],
    ['a ligand that only comes with the titrant', { initial_mmol: { H: 0.2 }, titrant_M: { H: -0.1, L: 0.1 }, volumes_mL: [0, 1, 2, 3] }, 'emptyAtPoint'],
  ])('refuses %s', (_, change, reason) => {
    const answer = refineConstants(system, [{ ...curve, ...change }])
    expect(answer).toMatchObject({ ok: false, reason })
    if (!answer.ok) expect(answer.accepted.length).toBeGreaterThan(5)
  })

  it.each<[string, Partial<TitrationSystem>]>([
    ['a system without water', { species: system.species.slice(1) }], ['a constant of no species', { refine: ['ML'] }], ['no constant to refine', { refine: [] }], ['no H', { components: ['L'] }],
  ])('refuses %s', (_, change) => {
    expect(refineConstants({ ...system, ...change }, [curve])).toMatchObject({ ok: false, reason: 'badSystem' })
  })

  it('refuses fewer points than unknowns plus one', () => {
    expect(refineConstants(system, [{ ...curve, volumes_mL: [1], readings: [4] }])).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(layOut({ ...curve, volumes_mL: [], readings: [] }, ['L', 'H'])).not.toHaveProperty('ok')
  })
})
