import { describe, expect, it } from 'vitest'
import { MEASUREMENTS } from '#shared/measurements/index'
import { guessKind } from '#shared/measurements/guessKind'
import { typedList } from '#shared/measurements/titration/conditions'
import { thermoTitration } from '#shared/measurements/titration/titration'
import { blocking, done, inputFrom, readAs } from '../support/kineticsTables'
import { TITRATIONS, titrationFile } from '../support/titrationTables'

const lines = titrationFile('moderate')
const flasks = titrationFile('batch', { off: 0 }).map(line => line === 'Base: 100 mM' ? 'Base: 99.8 mM' : line)
/** Lines with what `from` says put otherwise. */
const put = (from: RegExp, to: string, of = lines) => of.map(line => line.replace(from, to))
const without = (start: RegExp, of = lines) => of.filter(line => !start.test(line))
const problemsOf = (of: readonly string[]) => readAs(thermoTitration, of).problems

describe('a table of titrations that cannot be stored says why', () => {
  it.each([
    ['a negative total of metal', put(/^complex,SK-07,B2,2,2\.0,/, 'complex,SK-07,B2,2,-2,'), 'outOfDomain', '0'],
    ['a pH of 15', put(/,2\.3\d+$/, ',15.2', flasks), 'outOfDomain', '14'],
    ['no protonation constants', without(/^Protonation/), 'noProtonation', 'most basic first'],
    ['protonation constants that are no numbers', put(/^Protonation.*/, 'Protonation constants: about nine'), 'unreadableList', 'semicolons'],
    ['pKa in place of log K, which rise', put(/^Protonation.*/, 'Protonation constants: 2.7; 6.2; 9.5'), 'protonationRises', 'most basic first'],
    ['overall log β in place of steps', put(/^Protonation.*/, 'Protonation constants: 9.5; 15.7; 18.4'), 'outOfDomain', 'stepwise'],
    ['mV without any calibration', without(/^acid,/), 'noElectrode', 'strong acid'],
    ['a calibration of four points', [...without(/^acid,/), ...lines.filter(line => line.startsWith('acid,')).slice(0, 4)], 'fewPoints', '6'],
    ['no volume in the vessel', without(/^Initial volume/), 'noVessel', 'vessel'],
    ['no titrant', without(/^Base/), 'noTitrant', 'titrant'],
    ['volumes that fall', [...lines.slice(0, -1), put(/,\d\.\d+,(-?[\d.]+)$/, ',0.010,$1', [lines.at(-1)!])[0]!], 'volumesFall', 'rise'],
    ['metal in a calibration', put(/^acid,,,0,0,/, 'acid,,,0,1,'), 'metalWithoutLigand', 'ligand'],
    ['hydroxides of the metal above zero', [lines[0]!, 'Metal hydroxides: 8.0', ...lines.slice(1)], 'unreadableList', 'log *β'],
    ['no pKw', without(/^pKw/), 'condition', '11'],
  ])('%s', (_, of, id, accepted) => {
    const understood = readAs(thermoTitration, of)
    expect(understood.canStore).toBe(false)
    expect(understood.problems).toContainEqual(expect.objectContaining({ id, severity: 'blocks', accepted: expect.stringContaining(accepted) as string }))
  })

  it('is asked about acid that does not balance: more free than the vessel holds, and fewer protons than the ligand can give', () => {
    expect(problemsOf(flasks).map(one => one.id)).toEqual(['batchPoints'])
    const more = problemsOf(put(/^Ligand protons: 3/, 'Ligand protons: 0', flasks)).find(one => one.id === 'unbalanced')!
    expect(more).toMatchObject({ severity: 'asks', message: expect.stringContaining('mM more acid than') as string })
    const fewer = problemsOf(put(/^Ligand protons: 3/, 'Ligand protons: 9', flasks)).find(one => one.id === 'unbalanced')!
    expect(fewer).toMatchObject({ message: expect.stringContaining('less acid than') as string })
  })

  it('is asked about a curve of three points and about rows whose amounts differ', () => {
    const short = [...without(/^ligand,/), ...lines.filter(line => line.startsWith('ligand,')).slice(0, 3)]
    expect(problemsOf(short)).toContainEqual(expect.objectContaining({ id: 'fewPoints', severity: 'asks' }))
    expect(blocking(readAs(thermoTitration, short))).toEqual([])
  })

  it('is taken for a titration by its own words', () => {
    expect(guessKind(new TextEncoder().encode(lines.join('\n')), Object.values(MEASUREMENTS))?.kind).toBe('thermo.titration')
    expect(guessKind(new TextEncoder().encode(flasks.join('\n')), Object.values(MEASUREMENTS))?.kind).toBe('thermo.titration')
  })

  it.each(thermoTitration.templates)('has $fileName as a template of which only readings are missing', ({ text }) => {
    expect(new Set(blocking(readAs(thermoTitration, text.replaceAll('\r\n', '\n').split('\n'))))).toEqual(new Set(['noPoints']))
  })
})

describe('constants typed in one line', () => {
  it.each([
    ['9.52; 6.15; 2.72', [9.52, 6.15, 2.72]], ['9,52; 6,15', [9.52, 6.15]], ['9.52, 6.15, 2.72', [9.52, 6.15, 2.72]], ['9.52 6.15', [9.52, 6.15]], ['\u22128.0', [-8]], ['', []], ['9.5;;6', null], ['9.5,6.1', [9.5]], ['K1 9.5', null],
  ])('%j is read as %j', (text, values) => {
    if (text === '9.5,6.1') expect(typedList(text)).toBeNull()
    else expect(typedList(text)).toEqual(values)
  })
})

describe('what curves do not determine', () => {
  it('is a bound in words, and the other constants are refined without it', () => {
    const found = done(thermoTitration, inputFrom(thermoTitration, lines, { modelId: 'titrationMHL' }))
    const bound = found.series.parameters.find(one => one.name === 'logKMHL')!
    expect(bound).toMatchObject({ kind: '<', se: null, interval: null })
    expect(found.flags.map(flag => flag.id)).toEqual(['notDeterminable'])
    expect(found.flags[0]!.sentence).toMatch(/bound on the protonated complex MHL .* at most/)
    const logK = found.series.parameters.find(one => one.name === 'logK')!
    expect(Math.abs(logK.value - TITRATIONS.files.moderate.true.ML)).toBeLessThan(3 * logK.se!)
  })

  it('is refused where nothing is left to refine, or a step is held without its parent', () => {
    const held = (options: Record<string, string>, modelId = 'titrationML') => thermoTitration.analyse(inputFrom(thermoTitration, lines, { options, modelId }))
    expect(held({ protonation: 'hold', logKML: 'hold' })).toMatchObject({ ok: false, reason: 'nothingToHold', accepted: expect.stringContaining('conditions') as string })
    expect(held({ logKMHL: 'hold' }, 'titrationMHL')).toMatchObject({ ok: false, reason: 'holdsStep' })
    expect(held({}).tubes.map(tube => tube.label)).toEqual(['acid', 'ligand', 'complex'])
  })

  it('is refused with the readings as they are where no electrode could be calibrated', () => {
    const input = inputFrom(thermoTitration, lines)
    const outcome = thermoTitration.analyse({ ...input, exclusions: [{ tubeNo: 1, pointIndex: null, reason: 'The electrode was changed after it.' }] })
    expect(outcome).toMatchObject({ ok: false, reason: 'noElectrode', accepted: expect.stringContaining('strong acid') as string })
    expect(thermoTitration.tubeFigure(outcome.tubes[1]!).y).toMatchObject({ label: 'Reading', unit: 'mV' })
  })

  it('keeps held steps as typed, and finds the acid of every vessel when asked', () => {
    const exact = titrationFile('moderate', { off: 0 })
    const input = inputFrom(thermoTitration, exact, { options: { protonation: 'hold', acid: 'refine' } })
    const found = done(thermoTitration, input)
    expect(found.series.parameters.filter(one => one.name.startsWith('protonStep')).map(one => one.value)).toEqual(TITRATIONS.files.moderate.true.steps.map(step => expect.closeTo(step, 9) as number))
    const acids = found.tubes.flatMap(tube => tube.parameters.filter(one => one.name === 'acidFound_mmol'))
    expect(acids).toHaveLength(2)
    for (const acid of acids) expect(Math.abs(acid.value)).toBeLessThan(5 * acid.se!)
  })

  it('considers carbonate where it is stated, from the first base on', () => {
    const zero = put(/^(ligand,SK-07,B2,2,0,3),0\.050,(.*)$/, '$1,0.000,$2', [...lines.slice(0, 1), 'Carbonate: 0.05 mM', ...lines.slice(1)])
    const found = done(thermoTitration, inputFrom(thermoTitration, zero))
    expect(found.tubes[1]!.points[0]).toMatchObject({ fitted: null, excluded: expect.stringContaining('none of its carbonate') as string })
    const plain = done(thermoTitration, inputFrom(thermoTitration, lines))
    const [one, other] = [found, plain].map(({ series }) => series.headline.value) as [number, number]
    expect(one).not.toBe(other)
    // 0.05 % of the base as carbonate
    expect(Math.abs(one - other)).toBeLessThan(0.02)
  })

  it('reads points and whole curves that were left out, and says so', () => {
    const input = inputFrom(thermoTitration, lines)
    const found = done(thermoTitration, { ...input, exclusions: [{ tubeNo: 3, pointIndex: 4, reason: 'A bubble at the electrode.' }] })
    expect(found.tubes[2]!.points[4]).toMatchObject({ fitted: null, residual: null, excluded: 'A bubble at the electrode.' })
    expect(found.method).toContain('Left out: 1 point')
  })
})
