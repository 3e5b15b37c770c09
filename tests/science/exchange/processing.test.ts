import { describe, expect, it } from 'vitest'
import { arex, asymmetryArea, asymmetryCurve, readMirrored, type CentredSpectrum } from '../../../shared/science/exchange/asymmetry'
import { normaliseSpectrum, type RawSpectrum } from '../../../shared/science/exchange/normalise'
import { shiftBySymmetry, shiftByWaterDip } from '../../../shared/science/exchange/waterShift'
import { createRandom } from '../../../shared/science/random'
import { noisy, range, zOf } from '../../support/zSpectra'

const done = <T extends { ok: boolean }>(outcome: T): Extract<T, { ok: true }> => {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome))
  return outcome as Extract<T, { ok: true }>
}
const raw = (over: Partial<RawSpectrum> = {}): RawSpectrum => ({ offset_ppm: [3, 1, -1, -3], signal_au: [90, 50, 50, 90], order: [1, 2, 3, 4], s0: [{ signal_au: 100, order: 0 }], sd_au: null, ...over })

describe('normalisation', () => {
  it('divides by S0 and sorts by offset', () => {
    const spectrum = done(normaliseSpectrum(raw()))
    expect(spectrum.offset_ppm).toEqual([-3, -1, 1, 3])
    expect(spectrum.z).toEqual([0.9, 0.5, 0.5, 0.9])
    expect(spectrum.noise).toBeNull()
    expect(spectrum.zSe).toBeNull()
    expect(spectrum.drift).toBeNull()
  })

  it('takes a linear drift between bracketing S0 readings out exactly', () => {
    const gain = (order: number) => 1000 * (1 - 0.008 * order)
    const z = [0.95, 0.7, 0.2, 0.6, 0.93]
    const spectrum = done(normaliseSpectrum(raw({
      offset_ppm: [-4, -2, 0, 2, 4], order: [1, 2, 3, 4, 5], signal_au: z.map((value, i) => value * gain(i + 1)), s0: [{ signal_au: gain(0), order: 0 }, { signal_au: gain(6), order: 6 }],
    })))
    z.forEach((value, i) => expect(spectrum.z[i]).toBeCloseTo(value, 12))
    expect(spectrum.drift!.fraction).toBeCloseTo(-0.048, 12)
  })

  it('follows three brackets piece by piece, and holds the nearest outside them', () => {
    const spectrum = done(normaliseSpectrum(raw({
      offset_ppm: [-2, -1, 1, 2, 3], order: [0, 2, 4, 6, 9], signal_au: [100, 110, 110, 110, 120], s0: [{ signal_au: 100, order: 1 }, { signal_au: 120, order: 3 }, { signal_au: 100, order: 5 }, { signal_au: 120, order: 7 }],
    })))
    spectrum.z.forEach(value => expect(value).toBeCloseTo(1, 12))
  })

  it('takes the noise from repeats within brackets, so that drift is no noise [pooled variance]', () => {
    const spectrum = done(normaliseSpectrum(raw({
      s0: [{ signal_au: 99, order: -1 }, { signal_au: 101, order: 0 }, { signal_au: 79, order: 5 }, { signal_au: 81, order: 6 }],
    })))
    expect(spectrum.noise).toMatchObject({ from: 's0Repeats', dof: 2 })
    expect(spectrum.noise!.sd_au).toBeCloseTo(Math.SQRT2, 12)
    expect(spectrum.drift!.fraction).toBeCloseTo(-0.2, 12)
  })

  it('averages an offset that came twice and says how many readings it holds', () => {
    const spectrum = done(normaliseSpectrum(raw({ offset_ppm: [3, 1, 1, -3], signal_au: [90, 50, 52, 90], sd_au: 2 })))
    expect(spectrum.offset_ppm).toEqual([-3, 1, 3])
    expect(spectrum.readings).toEqual([1, 2, 1])
    expect(spectrum.members[1]).toEqual([1, 2])
    expect(spectrum.z[1]).toBeCloseTo(0.51, 12)
    expect(spectrum.zSe![1]! / spectrum.zSe![0]!).toBeCloseTo(Math.SQRT1_2, 12)
  })

  it('refuses a spectrum without S0, an S0 of zero and values that are no numbers', () => {
    expect(normaliseSpectrum(raw({ s0: [] }))).toMatchObject({ ok: false, reason: 'noS0' })
    expect(normaliseSpectrum(raw({ s0: [{ signal_au: 0, order: 0 }] }))).toMatchObject({ ok: false, reason: 'badS0' })
    expect(normaliseSpectrum(raw({ signal_au: [1, NaN, 1, 1] }))).toMatchObject({ ok: false, reason: 'notFinite' })
    expect(normaliseSpectrum(raw({ offset_ppm: [1, 1, 2, 2] }))).toMatchObject({ ok: false, reason: 'tooFewPoints' })
  })
})

describe('water shift by maximum symmetry [Kim et al. 2009]', () => {
  // 0.3 µT for 1 s at 7 T: a dip about a ppm wide
  const water = { fraction: 1, k_per_s: 0, rate1_per_s: 0.5, rate2_per_s: 20 }
  const STEP = 0.05
  const offsets = range(-1.2, 1.2, STEP)
  const scan = (shift: number) => offsets.map(offset => zOf([{ ...water, offset_ppm: shift }], { b0_T: 7, b1_uT: 0.3, tsat_s: 1 }, offset))

  it('finds the centre to a hundredth of the step wherever it lies between two offsets, without noise', () => {
    for (const shift of range(-0.2, 0.2, 0.0125)) {
      const found = done(shiftBySymmetry({ offset_ppm: offsets, z: scan(shift), zSe: null }))
      expect(Math.abs(found.shift_ppm - shift) / STEP).toBeLessThan(0.01)
    }
  })

  it('stays within a hundredth of the step, root mean square, at a signal-to-noise ratio of 400, and states the error it makes', () => {
    const random = createRandom('symmetry')
    const pulls: number[] = []
    const errors: number[] = []
    for (let draw = 0; draw < 400; draw++) {
      const shift = 0.3 * (random.uniform() - 0.5)
      const found = done(shiftBySymmetry({ offset_ppm: offsets, z: noisy(scan(shift), 0.0025, random), zSe: offsets.map(() => 0.0025) }))
      errors.push((found.shift_ppm - shift) / STEP)
      pulls.push((found.shift_ppm - shift) / found.se_ppm!)
    }
    const rms = (values: number[]) => Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length)
    expect(rms(errors)).toBeLessThan(0.01)
    expect(Math.abs(errors.reduce((sum, value) => sum + value, 0) / errors.length)).toBeLessThan(0.002)
    // 400 draws know their own spread to 3.5 %; interpolation and the larger of two noises widen the error a little
    expect(rms(pulls)).toBeGreaterThan(0.8)
    expect(rms(pulls)).toBeLessThan(1.15)
  })

  it('moves with the data: a shift of the axis shifts the answer, a mirrored axis turns its sign', () => {
    const z = noisy(scan(0.07), 0.002, createRandom('move'))
    const found = done(shiftBySymmetry({ offset_ppm: offsets, z, zSe: null }))
    const moved = done(shiftBySymmetry({ offset_ppm: offsets.map(at => at + 5), z, zSe: null }))
    const mirrored = done(shiftBySymmetry({ offset_ppm: offsets.map(at => -at).reverse(), z: [...z].reverse(), zSe: null }))
    // a minimum is flat: its place is known to half the digits of its value
    expect(moved.shift_ppm - 5).toBeCloseTo(found.shift_ppm, 5)
    expect(mirrored.shift_ppm).toBeCloseTo(-found.shift_ppm, 5)
  })

  it('finds the water of a spectrum from its own dip, with a pool at 50 ppm beside it', () => {
    const pools = [{ ...water, offset_ppm: 0.23 }, { offset_ppm: 50.23, fraction: 5e-4, k_per_s: 3000, rate1_per_s: 1, rate2_per_s: 100 }]
    const axis = [...range(-70, -6, 2), ...range(-4, 4, 0.25), ...range(6, 70, 2)]
    const z = axis.map(offset => zOf(pools, { b0_T: 7, b1_uT: 3, tsat_s: 3 }, offset))
    const found = done(shiftByWaterDip({ offset_ppm: axis, z, zSe: null }))
    expect(Math.abs(found.shift_ppm - 0.23)).toBeLessThan(0.01)
    expect(found.se_ppm!).toBeGreaterThan(0)
  })

  it.each([2.5, 4, 12])('finds the water of a dip with a flat bottom, %s µT for 15 s, noise 0.002, within a fifth of a step and the error it states', (b1_uT) => {
    const axis = [...range(-40, -10, 10), ...range(-5, 5, 0.5), ...range(10, 40, 10)]
    for (let draw = 0; draw < 20; draw++) {
      const z = noisy(axis.map(offset => zOf([{ ...water, rate2_per_s: 3, offset_ppm: 0.22 }], { b0_T: 7, b1_uT, tsat_s: 15 }, offset)), 0.002, createRandom(`flat ${draw}`))
      const found = done(shiftByWaterDip({ offset_ppm: axis, z, zSe: axis.map(() => 0.002) }))
      expect(Math.abs(found.shift_ppm - 0.22)).toBeLessThan(Math.min(0.1, 3.5 * found.se_ppm!))
      expect(found.se_ppm!).toBeLessThan(0.1)
    }
  })

  it('refuses a scan without a dip, with the dip at its end, or with six offsets', () => {
    expect(shiftBySymmetry({ offset_ppm: offsets, z: offsets.map(() => 0.9), zSe: null })).toMatchObject({ ok: false, reason: 'noDip' })
    expect(shiftBySymmetry({ offset_ppm: offsets, z: scan(1.15), zSe: null })).toMatchObject({ ok: false, reason: 'dipAtEdge' })
    expect(shiftByWaterDip({ offset_ppm: [-30, -20, -10, -1, 1, 10, 20, 30], z: [1, 1, 0.9, 0.2, 0.2, 0.9, 1, 1], zSe: null })).toMatchObject({ ok: false, reason: 'waterDipTooCoarse' })
    expect(shiftBySymmetry({ offset_ppm: offsets.slice(0, 6), z: scan(0).slice(0, 6), zSe: null })).toMatchObject({ ok: false, reason: 'tooFewPoints' })
  })
})

describe('asymmetry', () => {
  const at = range(-6, 6, 0.5)
  const z = at.map(x => 1 - 0.9 / (1 + x * x) - 0.2 / (1 + ((x - 4) / 0.8) ** 2))
  const spectrum: CentredSpectrum = { offset_ppm: at, z, zSe: at.map(() => 0.004), s0RelativeSe: 0.003, shiftSe_ppm: 0.01 }

  it('reads both sides of a pool on its own signed offset [definitions]', () => {
    const [lab, ref] = [z[at.indexOf(4)]!, z[at.indexOf(-4)]!]
    const reading = done(readMirrored(spectrum, 4))
    expect(reading.mtrAsym.value).toBeCloseTo(ref - lab, 12)
    expect(reading.ptr.value).toBeCloseTo(1 - lab / ref, 12)
    expect(reading.mtrRex.value).toBeCloseTo(1 / lab - 1 / ref, 12)
    expect(done(readMirrored(spectrum, -4)).mtrAsym.value).toBeCloseTo(lab - ref, 12)
  })

  it('propagates noise, S0 and water shift as 4,000 draws of all three spread', () => {
    const random = createRandom('asymmetry')
    const draws = Array.from({ length: 4000 }, () => {
      const scale = 1 + 0.003 * random.normal()
      const by = 0.01 * random.normal()
      const drawn = done(readMirrored({ ...spectrum, offset_ppm: at.map(x => x + by), z: noisy(z, 0.004, random).map(value => value * scale), zSe: null }, 4))
      return [drawn.mtrAsym.value, drawn.mtrRex.value]
    })
    const reading = done(readMirrored(spectrum, 4))
    const stated = [reading.mtrAsym.se!, reading.mtrRex.se!]
    stated.forEach((se, j) => {
      const mean = draws.reduce((sum, draw) => sum + draw[j]!, 0) / draws.length
      const sd = Math.sqrt(draws.reduce((sum, draw) => sum + (draw[j]! - mean) ** 2, 0) / (draws.length - 1))
      expect(Math.abs(se / sd - 1)).toBeLessThan(0.05)
    })
  })

  it('counts into the error, between two offsets, what two ways of interpolation differ by, and nothing of it at an offset', () => {
    const [between, at4] = [done(readMirrored(spectrum, 3.75)), done(readMirrored(spectrum, 4))]
    expect(at4.interpolation).toBeCloseTo(0, 14)
    // the dip of 0.2 is deeper between its points than the monotone cubic shows
    expect(Math.abs(between.interpolation!)).toBeGreaterThan(1e-4)
    expect(between.lab.se!).toBeGreaterThan(Math.abs(between.interpolation!))
  })

  it('has no asymmetry in a symmetric spectrum and no error where no noise is known', () => {
    const even = { ...spectrum, z: at.map(x => 1 - 0.9 / (1 + x * x)), zSe: null }
    asymmetryCurve(even).forEach(point => expect(Math.abs(point.value)).toBeLessThan(1e-14))
    expect(done(readMirrored(even, 3)).mtrAsym).toEqual({ value: expect.closeTo(0, 12) as number, se: null })
  })

  it('integrates the asymmetry in a window, with an error that 4,000 draws confirm', () => {
    const fine = range(-8, 8, 0.02)
    const narrow = { offset_ppm: fine, z: fine.map(x => 1 - 0.2 / (1 + ((x - 4) / 0.8) ** 2)), zSe: null, s0RelativeSe: null, shiftSe_ppm: null }
    // closed form: ∫ a/(1 + ((x − c)/g)²) = a·g·[atan((x − c)/g)]
    const primitive = (x: number) => 0.2 * 0.8 * Math.atan((x - 4) / 0.8)
    expect(done(asymmetryArea(narrow, [3, 5])).value).toBeCloseTo(primitive(5) - primitive(3) + primitive(-5) - primitive(-3), 5)
    const random = createRandom('area')
    const values = Array.from({ length: 4000 }, () => done(asymmetryArea({ ...spectrum, z: noisy(z, 0.004, random), zSe: null }, [2.3, 5.2])).value)
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length
    const sd = Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1))
    expect(Math.abs(done(asymmetryArea({ ...spectrum, s0RelativeSe: null, shiftSe_ppm: null }, [2.3, 5.2])).se! / sd - 1)).toBeLessThan(0.05)
  })

  it('carries the error of R1w into AREX, and refuses what the spectrum does not hold', () => {
    expect(arex({ value: 0.2, se: 0.01 }, { rate1_per_s: 0.4, se: 0.02 })).toEqual({ value: expect.closeTo(0.08, 12) as number, se: expect.closeTo(Math.hypot(0.004, 0.004), 12) as number })
    expect(readMirrored(spectrum, 7)).toMatchObject({ ok: false, reason: 'outsideSpectrum' })
    expect(readMirrored({ ...spectrum, z: z.map(() => -0.001) }, 3)).toMatchObject({ ok: false, reason: 'saturated' })
    expect(asymmetryArea(spectrum, [-1, 1])).toMatchObject({ ok: false, reason: 'badWindow' })
    expect(asymmetryArea(spectrum, [5, 9])).toMatchObject({ ok: false, reason: 'outsideSpectrum' })
  })
})
