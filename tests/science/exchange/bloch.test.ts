import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { PROTON_GAMMA_rad_per_s_T } from '../../../shared/science/constants'
import { faultOfBlock, faultOfSystem, ppmToRadPerS, type PoolSystem } from '../../../shared/science/exchange/poolSystem'
import { faultOfTrain, pulsedSpectrum, type PulseTrain } from '../../../shared/science/exchange/pulses'
import { columnCount, cwSensitivities } from '../../../shared/science/exchange/sensitivities'
import { cwSpectrum } from '../../../shared/science/exchange/spectrum'
import { omega1_rad_per_s, protonFraction } from '../../../shared/science/exchange/transferForms'

interface Reference {
  gamma_rad_per_s_uT: number
  sets: { system: PoolSystem, b1_uT: number, duration_s: number, initial_frac: number, offsets_ppm: number[], z: number[] }[]
  trains: { system: PoolSystem, train: PulseTrain, offsets_ppm: number[], z: number[] }[]
}
interface Case {
  id: string, tolerance: number, field_T: number, b1_uT: number, duration_s: number, water: PoolSystem['water'], solute: PoolSystem['solutes'][number]
  zAtPool: number, zMirrored: number, asymmetry: number, zSteady: number, alpha: number
}
const read = <T>(name: string) => JSON.parse(readFileSync(new URL(`../../../fixtures/reference/exchange/${name}`, import.meta.url), 'utf8')) as T
const scipy = read<Reference>('bloch.json')
const { cases, published } = read<{ cases: Case[], published: { shift_ppm: number, shiftTolerance_ppm: number, lifetime_us: number } }>('cases.json')
const worst = (a: ArrayLike<number>, b: ArrayLike<number>) => Math.max(...Array.from(a, (x, i) => Math.abs(x - b[i]!)))
const water = { rate1_per_s: 0.4, rate2_per_s: 8 }
const solute = { shift_ppm: 20, rate1_per_s: 1, rate2_per_s: 50, exchange_per_s: 800, ratio: 5e-4 }

/** Steady state of one pool: 1/Z = 1 + ω1²·T1·T2/(1 + (Δω·T2)²). */
const blochSteady = ({ rate1_per_s: r1, rate2_per_s: r2 }: PoolSystem['water'], b1_uT: number, difference_rad_per_s: number) =>
  1 / (1 + omega1_rad_per_s(b1_uT) ** 2 / (r1 * r2) / (1 + (difference_rad_per_s / r2) ** 2))

describe('Bloch–McConnell spectra', () => {
  it('are those of the matrix exponential for 100 systems of 2 and 3 pools and 6 of 4 within 1e-10 [SciPy linalg.expm]', () => {
    expect(scipy.gamma_rad_per_s_uT).toBe(PROTON_GAMMA_rad_per_s_T * 1e-6)
    expect(scipy.sets.length).toBe(106)
    for (const one of scipy.sets) expect(worst(cwSpectrum(one.system, one, one.offsets_ppm), one.z)).toBeLessThan(1e-10)
  })
  it('are those of products of matrix exponentials after a train of shaped pulses within 1e-10, spoiled or not [SciPy linalg.expm]', () => {
    for (const one of scipy.trains) expect(worst(pulsedSpectrum(one.system, one.train, one.offsets_ppm), one.z)).toBeLessThan(1e-10)
  })
  it.each(cases)('has the values of the case "$id" [fixtures/reference/exchange/cases.json]', (one) => {
    const system = { field_T: one.field_T, water: one.water, solutes: [one.solute] }
    const [at, mirrored] = cwSpectrum(system, one, [one.solute.shift_ppm, -one.solute.shift_ppm])
    expect(Math.abs(at! - one.zAtPool)).toBeLessThan(one.tolerance)
    expect(Math.abs(mirrored! - one.zMirrored)).toBeLessThan(one.tolerance)
    expect(Math.abs(mirrored! - at! - one.asymmetry)).toBeLessThan(one.tolerance)
    expect(Math.abs(cwSpectrum(system, { ...one, duration_s: Infinity }, [one.solute.shift_ppm])[0]! - one.zSteady)).toBeLessThan(one.tolerance)
  })
  it('has its dip at the published shift of the bound water and of the size that the published lifetime gives [J. Am. Chem. Soc. 123, 1517 (2001), from memory]', () => {
    const k = 1e6 / published.lifetime_us
    const rates = { rate1_per_s: 0.4, rate2_per_s: 1 }
    const system: PoolSystem = { field_T: 9.4, water: rates, solutes: [{ shift_ppm: published.shift_ppm, rate1_per_s: 5, rate2_per_s: 100, exchange_per_s: k, ratio: protonFraction(2, 10) }] }
    const offsets = Array.from({ length: 401 }, (_, i) => 40 + 0.05 * i)
    const z = cwSpectrum(system, { b1_uT: 20, duration_s: Infinity }, offsets)
    const mirrored = cwSpectrum(system, { b1_uT: 20, duration_s: Infinity }, offsets.map(x => -x))
    const asymmetry = Array.from(z, (value, i) => mirrored[i]! - value)
    const top = asymmetry.indexOf(Math.max(...asymmetry))
    expect(Math.abs(offsets[top]! - published.shift_ppm)).toBeLessThan(published.shiftTolerance_ppm)
    const alpha = omega1_rad_per_s(20) ** 2 / (omega1_rad_per_s(20) ** 2 + k * (k + 100))
    const transfer = protonFraction(2, 10) * k * alpha
    expect(Math.abs(1 / z[top]! - 1 / mirrored[top]! - transfer / rates.rate1_per_s)).toBeLessThan(0.02 * transfer / rates.rate1_per_s)
  })
  it('keeps the bits of an earlier version [our own output]', () => {
    const z = cwSpectrum({ field_T: 9.4, water, solutes: [solute, { ...solute, shift_ppm: -5 }] }, { b1_uT: 7, duration_s: 2.5 }, [-5, 0.3, 20, 21.7])
    expect(Array.from(z)).toEqual([0.49312374172073914, 0.007378079316313809, 0.6081796568793906, 0.9028024102718604])
  })
})

describe('limits of the Bloch–McConnell equations', () => {
  it('one pool remains without exchange [closed form of the Bloch equations]', () => {
    const system = { field_T: 9.4, water, solutes: [{ ...solute, exchange_per_s: 0 }] }
    for (const offset of [0, 0.2, 3, 20, 80]) {
      const expected = blochSteady(water, 12, offset * ppmToRadPerS(9.4))
      expect(cwSpectrum(system, { b1_uT: 12, duration_s: Infinity }, [offset])[0]! / expected).toBeCloseTo(1, 12)
      expect(cwSpectrum(system, { b1_uT: 12, duration_s: 90 }, [offset])[0]! / expected).toBeCloseTo(1, 10)
    }
    const none = cwSpectrum({ ...system, solutes: [{ ...solute, ratio: 0 }] }, { b1_uT: 12, duration_s: 1 }, [0.2, 20])
    expect(worst(none, cwSpectrum(system, { b1_uT: 12, duration_s: 1 }, [0.2, 20]))).toBeLessThan(1e-12)
  })
  it('nothing happens without irradiation, whatever the exchange (detailed balance) [equilibrium]', () => {
    for (const { system, duration_s, offsets_ppm } of scipy.sets) {
      for (const z of cwSpectrum(system, { b1_uT: 0, duration_s }, offsets_ppm)) expect(Math.abs(z - 1)).toBeLessThan(1e-12)
      for (const z of cwSpectrum(system, { b1_uT: 0, duration_s: Infinity }, offsets_ppm)) expect(Math.abs(z - 1)).toBeLessThan(1e-12)
    }
  })
  it('pools in exchange recover together at their weighted R1 without irradiation [fast exchange, closed form]', () => {
    const fast = { ...solute, exchange_per_s: 1e7, ratio: 0.02 }
    const mean = (water.rate1_per_s + fast.ratio * fast.rate1_per_s) / (1 + fast.ratio)
    const z = cwSpectrum({ field_T: 9.4, water, solutes: [fast] }, { b1_uT: 0, duration_s: 1.5, initial_frac: 0.2 }, [5])[0]!
    expect(z).toBeCloseTo(1 - 0.8 * Math.exp(-1.5 * mean), 7)
  })
  it('fast exchange merges the pools at their weighted place and rates [closed form]', () => {
    const x = 0.1
    const fast = { shift_ppm: 1, rate1_per_s: 2, rate2_per_s: 30, exchange_per_s: 1e10, ratio: x }
    const merged = { rate1_per_s: (water.rate1_per_s + x * 2) / (1 + x), rate2_per_s: (water.rate2_per_s + x * 30) / (1 + x) }
    const perPpm = ppmToRadPerS(9.4)
    for (const offset of [-1, 0, 0.09, 0.4]) {
      const z = cwSpectrum({ field_T: 9.4, water, solutes: [fast] }, { b1_uT: 0.5, duration_s: Infinity }, [offset])[0]!
      // Exchange adds pₐ·p_b·Δω²/k ≈ 5e-5 s⁻¹ to R2.
      expect(z / blochSteady(merged, 0.5, (x / (1 + x) - offset) * perPpm)).toBeCloseTo(1, 4)
    }
  })
  it('the transfer at the steady state is x·k·α/(R1w + x·k·α) for ω1² ≫ (R2s + k)(R1s + k) and no direct saturation [closed form]', () => {
    const far = { ...solute, shift_ppm: 5e4, exchange_per_s: 300, rate2_per_s: 20 }
    const z = cwSpectrum({ field_T: 9.4, water: { rate1_per_s: 0.4, rate2_per_s: 1 }, solutes: [far] }, { b1_uT: 100, duration_s: Infinity }, [5e4])[0]!
    const squared = omega1_rad_per_s(100) ** 2
    const transfer = far.ratio * 300 * squared / (squared + 300 * 320)
    expect(z / (0.4 / (0.4 + transfer))).toBeCloseTo(1, 4)
    const built = cwSpectrum({ field_T: 9.4, water: { rate1_per_s: 0.4, rate2_per_s: 1 }, solutes: [far] }, { b1_uT: 100, duration_s: 3 }, [5e4])[0]!
    expect(1 - built).toBeCloseTo(transfer / (0.4 + transfer) * (1 - Math.exp(-3 * (0.4 + transfer))), 3)
  })
  it('is the same block in one piece or in forty', () => {
    const system = { field_T: 9.4, water, solutes: [solute] }
    const train = { pieces: [{ b1_uT: 5, duration_s: 0.05 }], pause_s: 0, pulses: 40, isSpoiled: false }
    expect(worst(pulsedSpectrum(system, train, [0.2, 18, 20]), cwSpectrum(system, { b1_uT: 5, duration_s: 2 }, [0.2, 18, 20]))).toBeLessThan(1e-11)
  })
})

describe('derivatives of a spectrum', () => {
  const flatten = ({ water: w, waterShift_ppm, solutes }: PoolSystem, b1_uT: number) =>
    [w.rate1_per_s, w.rate2_per_s, waterShift_ppm ?? 0, b1_uT, ...solutes.flatMap(s => [s.shift_ppm, s.rate1_per_s, s.rate2_per_s, s.exchange_per_s, s.ratio])]
  const build = (p: readonly number[], field_T: number): PoolSystem => ({
    field_T, waterShift_ppm: p[2]!, water: { rate1_per_s: p[0]!, rate2_per_s: p[1]! },
    solutes: Array.from({ length: (p.length - 4) / 5 }, (_, s) => {
      const [shift_ppm, rate1_per_s, rate2_per_s, exchange_per_s, ratio] = p.slice(4 + 5 * s) as [number, number, number, number, number]
      return { shift_ppm, rate1_per_s, rate2_per_s, exchange_per_s, ratio }
    }),
  })
  it('are those of fourth-order differences, in every parameter, for 2, 3 and 4 pools, built up and steady [differences]', () => {
    const told = new Set<string>()
    for (const one of [...scipy.sets.slice(0, 6), ...scipy.sets.slice(50, 56), ...scipy.sets.slice(100)]) {
      for (const duration_s of [Math.min(one.duration_s, 0.3), Infinity]) {
        const count = one.offsets_ppm.length
        const columns = columnCount(one.system.solutes.length)
        const z = new Float64Array(count)
        const derivatives = new Float64Array(columns * count)
        cwSensitivities(one.system, { ...one, duration_s }, one.offsets_ppm, z, derivatives)
        expect(worst(z, cwSpectrum(one.system, { ...one, duration_s }, one.offsets_ppm))).toBeLessThan(1e-11)
        const at = flatten(one.system, one.b1_uT)
        for (let c = 0; c < columns; c++) {
          const h = 1e-3 * Math.max(Math.abs(at[c]!), 1e-3)
          const moved = (by: number) => {
            const p = at.map((value, k) => k === c ? value + by * h : value)
            return cwSpectrum(build(p, one.system.field_T), { ...one, duration_s, b1_uT: p[3]! }, one.offsets_ppm)
          }
          const [m2, m1, p1, p2] = [-2, -1, 1, 2].map(moved) as [Float64Array, Float64Array, Float64Array, Float64Array]
          for (let i = 0; i < count; i++) {
            const change = (8 * (p1[i]! - m1[i]!) - (p2[i]! - m2[i]!)) / 12
            // How far the second-order difference is off bounds the error of the fourth-order one; 1e-10 is the rounding of the spectra.
            const tolerance = Math.abs(change - (p1[i]! - m1[i]!) / 2) + 1e-10
            expect(Math.abs(change - h * derivatives[c * count + i]!), `column ${c}, point ${i}`).toBeLessThan(tolerance)
            if (Math.abs(change) > 100 * tolerance) told.add(`${columns} ${c} ${duration_s === Infinity}`)
          }
        }
      }
    }
    // Every column was told from zero: 9, 14 and 19 of them, built up and steady.
    expect(told.size).toBe(2 * (9 + 14 + 19))
  })
})

describe('systems outside the domain', () => {
  const system = { field_T: 9.4, water, solutes: [solute] }
  it.each([
    [{ ...system, field_T: 0 }, 'field'], [{ ...system, solutes: [] }, 'pools'], [{ ...system, water: { rate1_per_s: 0, rate2_per_s: 1 } }, 'water'],
    [{ ...system, solutes: [{ ...solute, rate2_per_s: -1 }] }, 'pool 1'], [{ ...system, solutes: [{ ...solute, ratio: NaN }] }, 'ratio'], [{ ...system, waterShift_ppm: Infinity }, 'place of water'],
  ] as const)('are named: %j', (bad, word) => {
    expect(faultOfSystem(bad)).toContain(word)
  })
  it('and a good one is not', () => {
    expect(faultOfSystem(system)).toBeNull()
    expect(faultOfBlock({ b1_uT: 0, duration_s: Infinity })).toBeNull()
    expect(faultOfBlock({ b1_uT: -1, duration_s: 1 })).toContain('B1')
    expect(faultOfBlock({ b1_uT: 1, duration_s: NaN })).toContain('time')
    expect(faultOfTrain({ pieces: [{ b1_uT: 1, duration_s: 0.02 }], pause_s: 0, pulses: 3, isSpoiled: true })).toBeNull()
    expect(faultOfTrain({ pieces: [{ b1_uT: 1, duration_s: 0.02 }], pause_s: 0, pulses: 1.5, isSpoiled: true })).toContain('pulse')
  })
})
