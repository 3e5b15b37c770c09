import { describe, expect, it } from 'vitest'
import { kineticsCourse } from '#shared/measurements/kinetics/course'
import { eyringRatio } from '#shared/science/kinetics/eyring'
import { toAgentEvidence } from '#shared/evidence/agentEvidence'
import { blocking, courseSignals, done, evidenceOf, inputFrom, readAs, SOLUTION, TIMES_h, type FlaskPlan } from '../support/kineticsTables'

const law = (acid_M: number, k0 = 0, k1 = 2e-5): number => k0 + k1 * acid_M
const ACIDS_M = [0.05, 0.1, 0.2, 0.4, 0.7, 1]
const flasks: FlaskPlan[] = ACIDS_M.map(acid_M => ({ name: `${acid_M} M HCl`, acid_M, rate_per_s: law(acid_M) }))

const wide = (plan: readonly FlaskPlan[], rows: readonly string[] = [], signals = courseSignals(plan), times: readonly number[] = TIMES_h): string[] => [
  ...SOLUTION, '', ...rows, ['Time (h)', ...plan.map(one => one.name)].join(','), ...times.map((time, i) => [time, ...signals.map(column => column[i]!)].join(',')),
]
const acidRow = (plan: readonly FlaskPlan[]): string => ['Acid (M)', ...plan.map(one => one.acid_M)].join(',')
const long = (plan: readonly FlaskPlan[], { named = true, unit = 'min' as 'min' | 'd' } = {}): string[] => {
  const signals = courseSignals(plan)
  const per = unit === 'min' ? 60 : 1 / 24
  return [...SOLUTION, '', `${named ? 'flask,' : ''}complex (µM),acid (mM),time (${unit}),R1 (1/s)`,
    ...plan.flatMap((one, j) => TIMES_h.map((time, i) => `${named ? `f${j + 1},` : ''}1000,${one.acid_M! * 1000},${Number((time * per).toPrecision(12))},${signals[j]![i]!}`))]
}

describe('time courses from a table [textbook first-order kinetics; acid as −log [H]]', () => {
  it.each([
    ['a column per flask, acids in a row', wide(flasks.map((one, i) => ({ ...one, name: `flask ${i + 1}` })), [acidRow(flasks)])],
    ['a column per flask, acids in the names', wide(flasks)],
    ['a row per point', long(flasks)],
    ['a row per point in days, flasks told apart by their acid alone', long(flasks, { named: false, unit: 'd' })],
  ])('%s: the same rates and the same law', (_, lines) => {
    const understood = readAs(kineticsCourse, lines)
    expect(blocking(understood)).toEqual([])
    expect(understood.tubes.map(tube => [tube.role, tube.conc_mM])).toEqual(ACIDS_M.map(() => ['sample', 1]))
    const input = inputFrom(kineticsCourse, lines)
    const outcome = done(kineticsCourse, input)
    outcome.tubes.forEach((tube, i) => {
      const k = tube.headline!
      expect(Math.abs(k.value - law(ACIDS_M[i]!))).toBeLessThan(4 * k.se!)
      expect(k.interval![0]).toBeLessThan(k.value)
      expect(tube.parameters[1]!.label).toBe('t_{1/2}')
      expect(tube.points.filter(point => point.studentised !== null).length).toBe(TIMES_h.length)
    })
    const k1 = evidenceOf(kineticsCourse, input).k1_per_M_s!
    expect(k1.value.kind).toBe('=')
    expect(Math.abs(k1.value.value - 2e-5)).toBeLessThan(3 * k1.value.se!)
    expect(k1).toMatchObject({ conditions: { temperature_K: 298.15, ionicStrength_M: 1, medium: 'KCl', signal: 'relaxation', pHMin: 0 }, detail: { form: 'sum', pHMin: 0, enthalpy_kJ_per_mol: null } })
    expect(k1.detail.pHMax).toBeCloseTo(-Math.log10(0.05), 12)
  })

  it('keeps the bound of a term that the rates cannot see, and says it in words', () => {
    const input = inputFrom(kineticsCourse, long(flasks))
    const { k0_per_s: k0 } = evidenceOf(kineticsCourse, input)
    expect(k0!.value).toMatchObject({ kind: '<', se: null, interval: null })
    expect(k0!.value.value).toBeGreaterThan(0)
    const outcome = done(kineticsCourse, input)
    expect(outcome.flags.map(flag => flag.id)).toContain('boundOnly')
    expect(outcome.series.statistics.find(one => one.label.startsWith('Half-life at pH 7.4'))!.text).toMatch(/^at least .* decades/)
    expect(kineticsCourse.seriesFigure(outcome)).toMatchObject({ x: { label: '[H^{+}]', unit: 'M' }, y: { unit: 's^-1' } })
    expect(kineticsCourse.tubeFigure(outcome.tubes[0]!).x).toMatchObject({ label: 'Time', unit: 'd' })
  })

  it('reads names of flasks as nothing of the agent: neither its concentration, nor a blank', () => {
    const understood = readAs(kineticsCourse, wide([{ name: 'water 1', rate_per_s: 1e-5 }, { name: '0.5 mM ZnCl2', rate_per_s: 1e-5 }, { name: 'buffer', rate_per_s: 1e-5 }], ['pH,4,4,4']))
    expect(understood.tubes.map(tube => [tube.label, tube.role, tube.conc_mM, tube.agent])).toEqual([['water 1', 'sample', 1, 'SK-07'], ['0.5 mM ZnCl2', 'sample', 1, 'SK-07'], ['buffer', 'sample', 1, 'SK-07']])
    expect(understood.problems.map(problem => problem.id)).not.toContain('noBlank')
  })

  it('asks for the concentration of the complex where nothing gives it', () => {
    const understood = readAs(kineticsCourse, wide(flasks).filter(line => !line.startsWith('Complex')))
    expect(understood.problems).toContainEqual(expect.objectContaining({ id: 'noConcentration', severity: 'blocks', field: 'conditions.complexConc_mM' }))
  })

  it('parts zinc from acid where both were varied, and draws measured rates against those of the law', () => {
    const plan = [0.001, 0.003, 0.01].flatMap((acid_M, i) => [0, 10, 30].map((zn_mM): FlaskPlan => ({ name: `f${i}-${zn_mM}`, acid_M, zn_mM, rate_per_s: 5.8e-3 * acid_M + 5.6e-4 * zn_mM / 1000 })))
    const input = inputFrom(kineticsCourse, wide(plan, [acidRow(plan), ['Zn (mM)', ...plan.map(one => one.zn_mM)].join(',')], courseSignals(plan, { noise: 0.002 })))
    const { k1_per_M_s: k1, kZn_per_M_s: kZn } = evidenceOf(kineticsCourse, input)
    expect(Math.abs(k1!.value.value - 5.8e-3)).toBeLessThan(3.5 * k1!.value.se!)
    expect(Math.abs(kZn!.value.value - 5.6e-4)).toBeLessThan(3.5 * kZn!.value.se!)
    expect(kineticsCourse.seriesFigure(done(kineticsCourse, input))).toMatchObject({ x: { scale: 'log' }, y: { scale: 'log' } })
    const mixed = evidenceOf(kineticsCourse, { ...input, modelId: 'rateLawSumMixed' })
    expect(mixed.kZnH_per_M2_s!.value.kind).toBe('<')
  })

  it('keeps a constant term as "at most" where the acid never changed', () => {
    const plan = [0, 5, 10, 20, 40].map((zn_mM): FlaskPlan => ({ name: `z${zn_mM}`, pH: 5, zn_mM, rate_per_s: 3e-6 + 5.6e-4 * zn_mM / 1000 }))
    const input = inputFrom(kineticsCourse, wide(plan, [['pH', ...plan.map(one => one.pH)].join(','), ['Zn (mM)', ...plan.map(one => one.zn_mM)].join(',')]))
    const { k0_per_s: k0, kZn_per_M_s: kZn } = evidenceOf(kineticsCourse, input)
    expect(kZn!.value.kind).toBe('=')
    expect(k0!.value.kind).toBe('<')
    expect(k0!.value.value).toBeGreaterThanOrEqual(3e-6 * 0.9)
    expect(done(kineticsCourse, input).flags.map(flag => flag.id)).toContain('lumped')
  })

  it('carries the law by one enthalpy from three temperatures, and refuses two [Eyring 1935]', () => {
    const warm = (temperature_C: number): FlaskPlan[] => [0.1, 0.5, 1].map(acid_M => ({ name: `${temperature_C}-${acid_M}`, acid_M, temperature_C, rate_per_s: law(acid_M) * eyringRatio(80, 298.15, temperature_C + 273.15) }))
    const plan = [...flasks.map(one => ({ ...one, temperature_C: 25, name: `c${one.acid_M}` })), ...warm(37), ...warm(50)]
    const rows = (some: readonly FlaskPlan[]) => [acidRow(some), ['Temperature (°C)', ...some.map(one => one.temperature_C)].join(',')]
    const signals = courseSignals(plan, { noise: 0.003 })
    const input = inputFrom(kineticsCourse, wide(plan, rows(plan), signals))
    const { k1_per_M_s: k1 } = evidenceOf(kineticsCourse, input)
    expect(k1!.conditions.temperature_K).toBeCloseTo(298.15, 6)
    expect(Math.abs(Number(k1!.detail.enthalpy_kJ_per_mol) - 80)).toBeLessThan(3 * Number(k1!.detail.enthalpy_se_kJ_per_mol))
    expect(Number(k1!.detail.enthalpy_se_kJ_per_mol)).toBeLessThan(5)
    const two = plan.filter(one => one.temperature_C !== 50)
    const refused = kineticsCourse.analyse(inputFrom(kineticsCourse, wide(two, rows(two), signals.filter((__, i) => plan[i]!.temperature_C !== 50))))
    expect(refused).toMatchObject({ ok: false, reason: 'temperaturesWithoutEnthalpy', message: expect.stringContaining('25 °C, 37 °C'), accepted: expect.stringContaining('one temperature') })
    expect(refused.tubes.every(tube => tube.headline !== null)).toBe(true)
  })

  it('refuses a law from two conditions, with the courses as they are', () => {
    const refused = kineticsCourse.analyse(inputFrom(kineticsCourse, wide(flasks.slice(3, 5))))
    expect(refused).toMatchObject({ ok: false, reason: 'tooFewPoints', accepted: expect.stringContaining('3 different conditions') })
    expect(refused.tubes.map(tube => tube.headline?.unit)).toEqual(['s^-1', 's^-1'])
  })

  it.each([
    ['[Gd(DOTA)]⁻', 338, 5.7e-7, [0, 40, 80, 150, 250, 400, 600, 900, 1300, 1800]],
    ['[Gd(BT-DO3A)]', 43, 4.48e-6, [0, 5, 10, 20, 35, 55, 80, 110, 150, 220]],
    ['[Gd(HP-DO3A)]', 3.9, 4.94e-5, [0, 0.5, 1, 2, 3, 5, 7, 10, 15, 20]],
  ])('gives the half-life of %s in 0.1 M HCl at 25 °C, %d h [Port et al., BioMetals 21, 469 (2008), from memory]', (_, half_h, rate_per_s, times_h) => {
    const plan = [1, 2, 3].map((n): FlaskPlan => ({ name: `run ${n}`, acid_M: 0.1, rate_per_s }))
    const input = inputFrom(kineticsCourse, wide(plan, [acidRow(plan)], courseSignals(plan, { times_h, noise: 0.01 }), times_h))
    const { halfLifeAcid_s: half } = evidenceOf(kineticsCourse, input)
    expect(half!.value.value / 3600 / half_h).toBeCloseTo(1, 1)
    expect(half!).toMatchObject({ value: { kind: '=', unit: 's' }, conditions: { acid_M: 0.1, acid: 'HCl', temperature_K: 298.15 } })
    expect(half!.value.interval![0]).toBeLessThan(Math.LN2 / rate_per_s)
    expect(half!.value.interval![1]).toBeGreaterThan(Math.LN2 / rate_per_s)
  })

  it('refuses a single condition that is no strong acid', () => {
    const outcome = kineticsCourse.analyse(inputFrom(kineticsCourse, wide([{ name: 'a', rate_per_s: 1e-5 }, { name: 'b', rate_per_s: 1e-5 }], ['pH,4,4'])))
    expect(outcome).toMatchObject({ ok: false, reason: 'oneCondition', accepted: expect.stringContaining('0.01 M') })
  })

  it('tells a course that does not decay, and one known by its initial rate, and goes on with the others', () => {
    const lines = wide([...flasks, { name: 'still', acid_M: 0.001, rate_per_s: 0 }], [acidRow([...flasks, { name: 'still', acid_M: 0.001, rate_per_s: 0 }])], courseSignals([...flasks, { name: 'still', rate_per_s: 0 }]))
    const outcome = done(kineticsCourse, inputFrom(kineticsCourse, lines))
    expect(outcome.tubes.at(-1)).toMatchObject({ headline: null, refusal: { reason: 'doesNotDecay', accepted: expect.stringContaining('moves towards its end') } })
    const slow: FlaskPlan[] = [{ name: 'a', acid_M: 0.1, rate_per_s: 1e-7 }]
    const ends = [...SOLUTION, 'Start value: 5', 'End value: 2', 'Acid: 0.1 M', '', ...wide(slow, [], courseSignals(slow, { noise: 0.001 })).slice(SOLUTION.length + 1)]
    expect(done(kineticsCourse, inputFrom(kineticsCourse, ends)).tubes[0]!.flags.map(flag => flag.id)).toEqual(['initialRate'])
  })

  it('refers counts of a nuclide to time zero', () => {
    const times = [0, 1, 2, 3, 4, 6, 8, 10]
    const k = 4e-5
    const lines = [...SOLUTION.map(line => line.startsWith('Signal') ? 'Signal: activity' : line), 'Half-life of the nuclide: 3 h', 'End value: 0', '', 'flask,acid (M),time (h),activity',
      ...times.map((t, i) => `a,0.1,${t},${(1e5 * Math.exp(-k * t * 3600) * 2 ** (-t / 3) * (1 + (i % 2 ? 1 : -1) * 1e-4)).toFixed(3)}`)]
    const { halfLifeAcid_s: half } = evidenceOf(kineticsCourse, inputFrom(kineticsCourse, lines))
    expect(half!.value.value / (Math.LN2 / k)).toBeCloseTo(1, 2)
  })

  it.each([
    ['°C typed as K', ['Temperature (K),25,25,25,25,25,25'], 'celsiusAsKelvin', '°C'],
    ['a pH of 15', ['pH,1,2,3,4,5,15'], 'outOfDomain', '14'],
  ])('stops %s', (_, rows, id, accepted) => {
    const { problems, canStore } = readAs(kineticsCourse, wide(flasks, [acidRow(flasks), ...rows]))
    expect(canStore).toBe(false)
    expect(problems).toContainEqual(expect.objectContaining({ id, severity: 'blocks', accepted: expect.stringContaining(accepted) }))
  })

  it('stops a flask whose acid is not said, or changes', () => {
    expect(blocking(readAs(kineticsCourse, wide([{ name: 'a', rate_per_s: 1e-5 }])))).toEqual(['noAcid'])
    const lines = long(flasks.slice(0, 1))
    const changed = [...lines.slice(0, -1), lines.at(-1)!.replace(',50,', ',60,')]
    expect(blocking(readAs(kineticsCourse, changed))).toEqual(['flaskVaries'])
  })

  it.each(kineticsCourse.templates.map(one => [one.fileName, one.text] as const))('%s is understood, but for what is still to be filled in', (_, text) => {
    const understood = readAs(kineticsCourse, [text.replaceAll('\r\n', '\n')])
    expect([...new Set(blocking(understood))]).toEqual(['noPoints'])
    expect(understood.tubes.map(tube => tube.conc_mM)).toEqual([1, 1, 1, 1, 1])
    expect(understood.conditions).toMatchObject({ signal: 'relaxation', temperature_K: 298.15, ionicStrength_mM: 1000, medium: 'KCl', acidKind: 'HCl', complexConc_mM: 1 })
  })

  it('is read by the placement as a typed rate law is: constants with range, form and correlation', () => {
    const plan = [0.01, 0.02, ...ACIDS_M].map((acid_M, i): FlaskPlan => ({ name: `p${i}`, acid_M, rate_per_s: law(acid_M, 4e-6) }))
    const drafts = Object.values(evidenceOf(kineticsCourse, inputFrom(kineticsCourse, wide(plan, [acidRow(plan)], courseSignals(plan, { noise: 0.002 })))))
    const origin = { kind: 'fit' as const, id: 'f1', chainId: 's1', versionNo: 1 }
    const items = drafts.map(({ value, ...draft }, i) => ({ ...draft, value: { ...value, evidenceId: `e${i}` }, id: `e${i}`, complexId: 'c', batchId: 'b', signed: true, checkState: 'signed' as const, origin }))
    const [k0, k1] = ['k0_per_s', 'k1_per_M_s'].map(name => items.find(item => item.quantity === name)!)
    expect([k0!.value.kind, k1!.value.kind]).toEqual(['=', '='])
    const placed = toAgentEvidence({ complexId: 'c', code: 'SK-07', mechanism: 'T1', topology: 'ring' }, items)
    expect(placed.evidence.find(item => item.id === k0!.id)!.covarianceGroup!.correlation![k1!.id]).toBeLessThan(0)
  })
})
