import { describe, expect, it } from 'vitest'
import { thermoTitration } from '#shared/measurements/titration/titration'
import { FigureSpec } from '#shared/schemas/figure'
import { EvidenceDraft } from '#shared/evidence/types'
import { canonicalJson } from '#shared/science/canonical'
import type { AnalysisOutcome } from '#shared/measurements/types'
import { conditionalConstant } from '#shared/science/equilibria/conditional'
import { done, evidenceOf, inputFrom, readAs } from '../support/kineticsTables'
import { TITRATIONS, titrationFile } from '../support/titrationTables'

const { moderate, protonated, batch } = TITRATIONS.files
type Done = Extract<AnalysisOutcome, { ok: true }>
const parameter = ({ series }: Done, name: string) => series.parameters.find(one => one.name === name)!

/** Every constant of the set within three standard errors of the script's, and those errors no larger than `most`. */
function expectFound(outcome: Done, { steps, ML, MHL, MLOH }: typeof protonated.true, most: number): void {
  const known: [string, number | undefined][] = [['logK', ML], ['logKMHL', MHL], ['logKMLOH', MLOH], ...steps.map((step, j): [string, number] => [`protonStep${j + 1}`, step])]
  for (const [name, value] of known) {
    if (value === undefined) continue
    const one = parameter(outcome, name)
    expect(one.kind, name).toBe('=')
    expect(one.se, name).toBeGreaterThan(0)
    expect(one.se, name).toBeLessThan(most)
    expect(Math.abs(one.value - value), name).toBeLessThan(3 * one.se!)
  }
}

describe('titrations from a table [fixtures/reference/titration/generate_tables.py: scipy brentq, checked against mpmath findroot]', () => {
  const input = inputFrom(thermoTitration, titrationFile('moderate'))
  const outcome = done(thermoTitration, input)

  it('calibrate the electrode on their strong acid: E°, slope, pKw and titre within three standard errors', () => {
    const acid = outcome.tubes.find(tube => tube.label === 'acid')!
    expect(acid.role).toBe('blank')
    for (const [name, value] of [['e0_mV', TITRATIONS.electrode.e0_mV], ['slope_mV', TITRATIONS.electrode.slope_mV], ['pKw', TITRATIONS.pKw], ['base_mM', TITRATIONS.base_mM]] as const) {
      const one = acid.parameters.find(candidate => candidate.name === name)!
      expect(Math.abs(one.value - value), name).toBeLessThan(3 * one.se!)
    }
    expect(thermoTitration.tubeFigure(acid)).toMatchObject({ x: { label: 'Base added', unit: 'mL' }, y: { label: 'Reading', unit: 'mV' } })
  })

  it('give log K and all steps of the ligand within three standard errors from starts that are off, nothing said of log K', () => {
    expectFound(outcome, moderate.true, 0.02)
    expect(outcome.series.headline).toMatchObject({ name: 'logK', kind: '=' })
    expect(outcome.flags).toEqual([])
    expect(outcome.series.statistics.find(one => one.label === 'Points')!.text).toBe('140 of 2 curves')
    const reduced = outcome.series.statistics.find(one => one.label === 'Reduced chi-square')!.value!
    // 136 degrees of freedom: 0.72 to 1.31 holds 99 %
    expect(reduced).toBeGreaterThan(0.7)
    expect(reduced).toBeLessThan(1.35)
    expect(outcome.method).toContain('calibrated as −log[H] by 1 titration of strong acid')
  })

  it('give a protonated and a hydroxo complex beside', () => {
    const found = done(thermoTitration, inputFrom(thermoTitration, titrationFile('protonated'), { modelId: 'titrationMHLMLOH' }))
    expectFound(found, protonated.true, 0.06)
    expect(found.flags).toEqual([])
  })

  it('give log K from batch points, each a flask with amounts of its own, the ligand held', () => {
    const lines = titrationFile('batch', { off: 0 }).map(line => line === 'Base: 100 mM' ? 'Base: 99.8 mM' : line)
    expect(readAs(thermoTitration, lines).problems.map(problem => problem.id)).toEqual(['batchPoints'])
    const found = done(thermoTitration, inputFrom(thermoTitration, lines))
    const logK = parameter(found, 'logK')
    expect(Math.abs(logK.value - batch.true.ML)).toBeLessThan(3 * logK.se!)
    expect(found.series.parameters.filter(one => one.name.startsWith('protonStep')).map(one => [one.label, one.se])).toEqual([1, 2, 3].map(j => [`log K_{${j}} of the ligand, held`, null]))
    expect(found.method).toContain('a batch series of separate flasks')
    expect(thermoTitration.tubeFigure(found.tubes[0]!).x.label).toBe('Flask')
    // held constants have no error typed, so nothing is claimed of what follows from them
    expect(parameter(found, 'logKConditional').se).toBeNull()
  })

  it('hand the errors of the calibration on: without them, by E° and slope typed, the errors read far smaller', () => {
    const typed = titrationFile('moderate', { more: ['E0: 402.3 mV', 'Slope: 58.9 mV'] }).filter(line => !line.startsWith('acid,')).map(line => line === 'Base: 100 mM' ? 'Base: 99.8 mM' : line)
    const found = done(thermoTitration, inputFrom(thermoTitration, typed))
    expectFound(found, moderate.true, 0.004)
    expect(parameter(outcome, 'logK').se! / parameter(found, 'logK').se!).toBeGreaterThan(2)
  })

  it('are evidence as a typed stability record says it: log K with its steps, conditional log K and pM at pH 7.4', () => {
    const evidence = evidenceOf(thermoTitration, input)
    expect(Object.keys(evidence)).toEqual(['logK', 'logKConditional', 'pM'])
    for (const draft of Object.values(evidence)) {
      expect(EvidenceDraft.parse(draft)).toEqual(draft)
      const shown = parameter(outcome, draft.quantity)
      expect([draft.value.value, draft.value.se, draft.value.interval]).toEqual([shown.value, shown.se, shown.interval])
    }
    expect(evidence.logK).toMatchObject({ conditions: { metal: 'Gd', temperature_K: 298.15, ionicStrength_M: 0.1, medium: 'KCl', method: 'potentiometry', pHScale: 'concentration' }, detail: { metal: 'Gd', complexProtonation: [] } })
    const expected = conditionalConstant({ logK: moderate.true.ML, ligandProtonation: moderate.true.steps }, 7.4).logKCond
    expect(Math.abs(evidence.logKConditional!.value.value - expected)).toBeLessThan(3 * evidence.logKConditional!.value.se!)
    // log K and the steps err together, so the conditional constant is better known than log K
    expect(evidence.logKConditional!.value.se!).toBeLessThan(evidence.logK!.value.se!)
  })

  it('are drawn as figures that fit the schema, residuals of every curve over pH', () => {
    const series = thermoTitration.seriesFigure(outcome)!
    expect(FigureSpec.parse(series)).toEqual(series)
    expect(series.layers.filter(layer => layer.type === 'points').map(layer => layer.name)).toEqual(['ligand', 'complex'])
    for (const tube of outcome.tubes) expect(FigureSpec.parse(thermoTitration.tubeFigure(tube))).toEqual(thermoTitration.tubeFigure(tube))
  })

  it('are the same to the last bit for the same input [determinism]', () => {
    expect(canonicalJson(thermoTitration.analyse(JSON.parse(JSON.stringify(input))))).toBe(canonicalJson(outcome))
  })

  it('give the ligand alone its protonation constants and no evidence on a complex', () => {
    const alone = inputFrom(thermoTitration, titrationFile('moderate').filter(line => !line.startsWith('complex,')))
    const found = done(thermoTitration, alone)
    expect(found.series.headline.name).toBe('protonStep1')
    expect(thermoTitration.evidence(found, alone)).toEqual([])
    moderate.true.steps.forEach((step, j) => expect(Math.abs(parameter(found, `protonStep${j + 1}`).value - step)).toBeLessThan(3 * parameter(found, `protonStep${j + 1}`).se!))
  })
})
