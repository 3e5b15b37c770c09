import { describe, expect, it } from 'vitest'
import type { EvidenceItemDto } from '../../shared/evidence/item'
import { constantConditions, constantsSideBySide } from '../../shared/evidence/constantConditions'
import type { RecordContext } from '../../shared/evidence/records/define'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import { thermo } from '../../shared/evidence/records/thermo'
import { validateEntry } from '../../shared/evidence/records/validate'
import { EvidenceDraft } from '../../shared/evidence/types'
import { comparable } from '../../shared/science/equilibria/comparable'
import { PUBLISHED, thermoEntry } from '../support/publishedRecords'

const context: RecordContext = { metal: 'Gd', ligandProtonation: null }
const steps = (...values: number[]): RecordEntry[string] => ({ type: 'steps', steps: values.map(value => ({ value, se: null })) })
const choice = (word: string): RecordEntry[string] => ({ type: 'choice', choice: word })
const exact = (value: number, unit = ''): RecordEntry[string] => ({ type: 'quantity', kind: '=', value, se: null, unit })
const plain = (value: number, unit = ''): RecordEntry[string] => ({ type: 'number', value, unit })
const problems = (changes: RecordEntry, ctx = context) => validateEntry(thermo, thermoEntry(PUBLISHED.dtpa, changes), ctx)
function emitted(changes: RecordEntry) {
  const entry = thermoEntry(PUBLISHED.dtpa, changes)
  expect(validateEntry(thermo, entry, context)).toEqual([])
  return Object.fromEntries(thermo.emits(entry, context).map(draft => [draft.quantity, EvidenceDraft.parse(draft)]))
}

describe('lists of constants', () => {
  it.each([
    ['stepwise', [2.39, 1.1]], ['overall', [2.39, 3.49]], ['fromParts', [24.85, 25.95]],
  ] as const)('of the protonated complex given as %s are the same stepwise constants [closed form; log K 22.46]', (form, values) => {
    const { logK } = emitted({ complexProtonation: steps(...values), complexProtonationForm: choice(form) })
    expect(logK!.detail.complexProtonation).toEqual([expect.closeTo(2.39, 10), expect.closeTo(1.1, 10)])
  })

  it.each([
    ['hydrolysis', [-9.5, -20], {}], ['acid', [9.5, 10.5], {}], ['hydroxide', [4.28, 3.28], { pKw: plain(13.78) }], ['hydroxideOverall', [4.28, 7.56], { pKw: plain(13.78) }],
  ] as const)('of hydroxo complexes given as %s are the same log *β [ML = ML(OH) + H; pK_w 13.78 from memory]', (form, values, more) => {
    const { logK } = emitted({ complexHydroxide: steps(...values), complexHydroxideForm: choice(form), ...more })
    expect(logK!.detail.complexHydroxide).toEqual([expect.closeTo(-9.5, 10), expect.closeTo(-20, 10)])
  })

  it('move the conditional constant as the side reactions say: half of the metal as hydroxide takes log 2 [Ringbom]', () => {
    const bare = emitted({})
    const half = emitted({ metalHydroxide: steps(-7.4), metalHydroxideForm: choice('hydrolysis') })
    expect(bare.logKConditional!.value.value - half.logKConditional!.value.value).toBeCloseTo(Math.log10(2), 10)
    // pM counts the free aqua ion: what hydroxide holds is not free, and the ligand holds as much as before
    expect(half.pM!.value.value).toBeCloseTo(bare.pM!.value.value, 6)
    const hydroxo = emitted({ complexHydroxide: steps(7.4), complexHydroxideForm: choice('acid') })
    expect(hydroxo.logKConditional!.value.value - bare.logKConditional!.value.value).toBeCloseTo(Math.log10(2), 10)
  })

  it('given stepwise and overall are taken when they agree, refused with what is accepted when they contradict each other', () => {
    const both = (...overall: number[]) => ({ protonationOverall: steps(...overall) })
    expect(problems(both(10.49, 19.09, 23.37, 26.01, 28.01))).toEqual([])
    expect(problems(both(10.49, 8.6, 4.28, 2.64, 2))).toEqual([expect.objectContaining({ field: 'protonationOverall', message: expect.stringContaining('19.09') as string, accepted: expect.stringContaining('One form only') as string })])
    expect(problems(both(10.49, 19.09))).toEqual([expect.objectContaining({ field: 'protonationOverall', message: expect.stringContaining('5 stepwise') as string })])
  })

  it('given as overall constants alone are read as such', () => {
    const { protonation: _, protonationForm: __, ...entry } = thermoEntry(PUBLISHED.dtpa, { protonationOverall: steps(10.49, 19.09, 23.37, 26.01, 28.01) })
    const logK = thermo.emits(entry, context).find(draft => draft.quantity === 'logK')!
    expect(logK.detail.protonation).toEqual([10.49, 8.6, 4.28, 2.64, 2].map(value => expect.closeTo(value, 10) as number))
  })

  it.each<[string, RecordEntry, string]>([
    ['hydroxides without their form', { metalHydroxide: steps(-7.9) }, 'metalHydroxideForm'],
    ['a pKa called log *β', { metalHydroxide: steps(7.9), metalHydroxideForm: choice('hydrolysis') }, 'metalHydroxide'],
    ['constants with hydroxide without pK_w', { complexHydroxide: steps(4.3), complexHydroxideForm: choice('hydroxide') }, 'pKw'],
    ['overall constants of the protonated complex called stepwise', { complexProtonation: steps(24.85), complexProtonationForm: choice('stepwise') }, 'complexProtonation'],
    ['the metal of the agent as another lanthanide', { otherLanthanide: choice('Gd'), logKLn: exact(22) }, 'otherLanthanide'],
    ['another lanthanide without its constant', { otherLanthanide: choice('La') }, 'logKLn'],
  ])('refuse %s and say what is accepted', (_, changes, field) => {
    const found = problems(changes)
    expect(found.map(one => one.field)).toEqual([field])
    expect(found[0]!.accepted.length).toBeGreaterThan(5)
  })
})

describe('competitors and enthalpy', () => {
  it('carry iron, manganese, a chosen lanthanide and small ligands under names of their own, with their metal', () => {
    const evidence = emitted({ logKFe: exact(28), logKMn: exact(15.6), otherLanthanide: choice('La'), logKLn: exact(19.48), logKWithCitrate: exact(7.8), enthalpy: exact(-7.1, 'kJ/mol') })
    expect([evidence.logKFe!.detail.metal, evidence.logKMn!.detail.metal, evidence.logKLn!.detail.metal]).toEqual(['Fe', 'Mn', 'La'])
    expect(evidence.logKWithCitrate!.detail).toEqual({ metal: 'Gd', ligand: 'citrate' })
    expect(evidence.logK!.detail.enthalpy_kJ_per_mol).toBe(-7.1)
  })
})

describe('a figure of common practice', () => {
  const practice: RecordEntry = { logK: exact(12), method: choice('practice') }
  it('is asked for no conditions, and refused any', () => {
    expect(validateEntry(thermo, practice, context)).toEqual([])
    expect(validateEntry(thermo, { ...practice, temperature_K: plain(25, '°C') }, context).map(one => one.field)).toEqual(['temperature_K'])
    expect(thermo.describe({ method: 'practice' })).toBe('common practice, no source')
  })

  it('is flagged where it meets protonation constants of the ligand', () => {
    const registered = { steps: [{ value: 9.56, se: null }, { value: 5.95, se: null }], temperature_K: 298.15, ionicStrength_M: 0.1, medium: 'NMe4Cl' }
    const pM = thermo.emits(practice, { ...context, ligandProtonation: registered }).find(draft => draft.quantity === 'pM')!
    expect(pM.detail).toMatchObject({ mixedMedia: true, mediumNote: expect.stringContaining('not stated') as string })
  })
})

describe('constants of two records side by side', () => {
  const zinc = (id: string, value: number, ionicStrength_M: number): EvidenceItemDto => ({
    id, quantity: 'logKZn', complexId: 'c', batchId: null, value: { value, kind: '=', se: null, interval: null, unit: '', evidenceId: id }, covarianceGroup: null, detail: { metal: 'Zn' }, signed: false, checkState: 'draft',
    conditions: { metal: 'Zn', temperature_K: 298.15, ionicStrength_M, medium: 'KCl', pHScale: 'concentration' }, origin: { kind: 'record', id: `record ${id}`, chainId: id, versionNo: 1 },
  })

  it('refuse Zn-EDTA at I = 0 and at 0.1 M in one comparison, naming both [NIST SRD 46: 18.0 and 16.5]', () => {
    expect(constantsSideBySide([zinc('a', 18, 0), zinc('b', 16.5, 0.1)])).toEqual([expect.stringMatching(/Zn, 18, is for I = 0 M.*Zn, 16.5, for 0.1 M.*Accepted: /)])
    expect(constantsSideBySide([zinc('a', 16.44, 0.1), zinc('b', 16.5, 0.1)])).toEqual([])
  })

  it('say nothing of constants that one record brought together', () => {
    const one = zinc('a', 18, 0)
    expect(constantsSideBySide([one, { ...one, id: 'b', value: { ...one.value, value: 16.5 }, conditions: { ...one.conditions, ionicStrength_M: 0.1 } }])).toEqual([])
  })

  it('know sodium from tetraalkylammonium, and an electrolyte that is not stated from one that is', () => {
    const at = (medium: string) => constantConditions(medium, { temperature_K: 298.15, ionicStrength_M: 0.1, medium, pHScale: 'concentration' })
    expect(comparable([at('NaClO4'), at('NMe4Cl')])).toMatchObject({ ok: false, reason: 'electrolyte' })
    expect(comparable([at('KCl'), at('notStated')])).toMatchObject({ ok: true, warnings: [expect.stringContaining('Electrolyte of notStated')] })
    expect(constantConditions('x', { method: 'practice' })).toEqual({ label: 'x', ionicStrength_M: null, temperature_K: null, cation: null, phScale: null })
  })
})
