import { describe, expect, it } from 'vitest'
import { evidenceQuantity } from '../../shared/evidence/quantities'
import type { RecordContext } from '../../shared/evidence/records/define'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import { RECORD_KINDS } from '../../shared/evidence/records/index'
import { validateEntry } from '../../shared/evidence/records/validate'
import { conditionsOf } from '../../shared/evidence/records/values'
import { EvidenceDraft } from '../../shared/evidence/types'
import { PUBLISHED, rateLawEntry, thermoEntry } from '../support/publishedRecords'

const context: RecordContext = { metal: 'Gd', ligandProtonation: null }
const { thermo, rateLaw, acidHalfLife, zincPhosphateRatio, challenge, formation } = RECORD_KINDS as Record<string, NonNullable<(typeof RECORD_KINDS)[string]>>
const emitted = (kind: NonNullable<typeof thermo>, entry: RecordEntry, ctx = context) => {
  expect(validateEntry(kind, entry, ctx)).toEqual([])
  return Object.fromEntries(kind.emits(entry, ctx).map(draft => [draft.quantity, EvidenceDraft.parse(draft)]))
}

describe('stability constants as a record', () => {
  it.each([['dtpa', 19.1], ['dtpaBma', 15.8], ['dota', 18.65], ['hpDo3a', 18.16]] as const)('give the published pGd of %s, %f [Cacheris 1990 for the first two; mass balance with the same constants for the others]', (name, pGd) => {
    const evidence = emitted(thermo!, thermoEntry(PUBLISHED[name]))
    expect(evidence.pM!.value.value).toBeCloseTo(pGd, 1)
    expect(evidence.pM!.conditions).toMatchObject({ pH: 7.4, metal_M: 1e-6, ligand_M: 1e-5 })
  })

  it('carry the errors of log K and of the protonation constants into pM [propagation, closed form]', () => {
    const { pM, logKConditional } = emitted(thermo!, thermoEntry(PUBLISHED.dtpaBma))
    // at pH 7.4 the bisamide holds one proton to 98.9 %, so log α_H moves with log K1 only
    expect(pM!.value.se).toBeCloseTo(Math.hypot(0.1, 0.05 * 0.989), 3)
    expect(logKConditional!.value.se).toBe(pM!.value.se)
  })

  it('stay without an error where one constant has none', () => {
    const entry = thermoEntry(PUBLISHED.dtpaBma, { protonation: { type: 'steps', steps: PUBLISHED.dtpaBma.protonation.map(value => ({ value, se: null })) } })
    expect(emitted(thermo!, entry).pM!.value.se).toBeNull()
  })

  it.each([
    ['overall', [9.37, 13.75, 17.06]], ['acid', [3.31, 4.38, 9.37]],
  ] as const)('read protonation constants given as %s as the same ligand [closed form]', (form, values) => {
    const entry = thermoEntry(PUBLISHED.dtpaBma, { protonation: { type: 'steps', steps: values.map(value => ({ value, se: null })) }, protonationForm: { type: 'choice', choice: form } })
    expect(emitted(thermo!, entry).pM!.value.value).toBeCloseTo(15.83, 2)
  })

  it('refuse constants that cannot be stepwise and say to look at the form', () => {
    const entry = thermoEntry(PUBLISHED.dtpaBma, { protonation: { type: 'steps', steps: [3.31, 4.38, 9.37].map(value => ({ value, se: null })) } })
    expect(validateEntry(thermo!, entry, context)).toEqual([expect.objectContaining({ field: 'protonation', accepted: expect.stringContaining('form chosen') as string })])
  })

  it('keep a bound a bound: log K more than 20 makes pM a "more than" without an error', () => {
    const entry = thermoEntry(PUBLISHED.dtpa, { logK: { type: 'quantity', kind: '>', value: 20, se: null, unit: '' } })
    const { logK, pM, logKConditional } = emitted(thermo!, entry)
    expect([logK!.value.kind, pM!.value.kind, logKConditional!.value.kind]).toEqual(['>', '>', '>'])
    expect(pM!.value.se).toBeNull()
  })

  it('use the constants registered with the ligand where the record has none, and flag another medium', () => {
    const { protonation: _, protonationForm: __, ...entry } = thermoEntry(PUBLISHED.dtpaBma)
    const steps = PUBLISHED.dtpaBma.protonation.map(value => ({ value, se: null }))
    const sodium = { ...context, ligandProtonation: { steps, temperature_K: 298.15, ionicStrength_M: 0.15, medium: 'NaCl' } }
    const same = { ...context, ligandProtonation: { steps, temperature_K: 298.15, ionicStrength_M: 0.1, medium: 'KCl' } }
    expect(emitted(thermo!, entry, sodium).pM!.detail).toMatchObject({ mixedMedia: true, mediumNote: expect.stringContaining('NaCl') as string })
    expect(emitted(thermo!, entry, same).pM!.detail).toMatchObject({ mixedMedia: false, mediumNote: null })
    expect(emitted(thermo!, entry, same).pM!.value.value).toBeCloseTo(15.83, 2)
  })

  it('emit no pM where no protonation constant is known: not known is not "no protons"', () => {
    const { protonation: _, protonationForm: __, ...entry } = thermoEntry(PUBLISHED.dtpa)
    expect(Object.keys(emitted(thermo!, entry))).toEqual(['logK', 'logKCa', 'logKZn', 'logKCu'])
  })
})

describe('a rate law as a record', () => {
  it('emits each constant with its bound, its own unit and the measured range', () => {
    const evidence = emitted(rateLaw!, rateLawEntry({ k0_per_s: { value: 5e-8, kind: '<' }, k1_per_M_s: { value: 0.58, se: 0.04 }, kZn_per_M_s: { value: 0.056, se: 0.006 } }))
    expect(evidence.k0_per_s!.value).toMatchObject({ kind: '<', value: 5e-8, se: null, interval: null, unit: evidenceQuantity('k0_per_s').unit })
    expect(evidence.k1_per_M_s!.value).toMatchObject({ kind: '=', value: 0.58, se: 0.04, unit: evidenceQuantity('k1_per_M_s').unit })
    expect(evidence.k1_per_M_s!.conditions).toMatchObject({ temperature_K: 298.15, pHMin: 3.5, pHMax: 5.2 })
    expect(evidence.k2_per_M2_s).toBeUndefined()
  })

  it('converts what was typed per hour and per mM [closed form]', () => {
    const evidence = emitted(rateLaw!, rateLawEntry({ k0_per_s: { value: 3.6, unit: 'h^-1' }, k1_per_M_s: { value: 2, se: 0.1, unit: 'mM^-1 s^-1' } }))
    expect(evidence.k0_per_s!.value.value).toBeCloseTo(1e-3, 15)
    expect(evidence.k1_per_M_s!.value).toMatchObject({ value: 2000, se: 100 })
  })

  it.each([
    ['no constant at all', rateLawEntry({}), 'k1_per_M_s'],
    ['a constant of zero', rateLawEntry({ k1_per_M_s: { value: 0 } }), 'k1_per_M_s'],
    ['a bound with an error', rateLawEntry({ k0_per_s: { value: 1e-8, kind: '<', se: 1e-9 } }), 'k0_per_s'],
    ['a saturation constant in the sum form', rateLawEntry({ k1_per_M_s: { value: 1 }, k3_per_s: { value: 1, unit: 's^-1' } }), 'k3_per_s'],
    ['k3 without K(M)', rateLawEntry({ k3_per_s: { value: 1, unit: 's^-1' } }, { form: { type: 'choice', choice: 'saturation' }, metalOfLaw: { type: 'choice', choice: 'Zn' } }), 'kMetal_per_M'],
    ['an unknown unit', rateLawEntry({ k1_per_M_s: { value: 1, unit: 's^-1' } }), 'k1_per_M_s'],
    ['ends of pH the wrong way round', rateLawEntry({ k1_per_M_s: { value: 1 } }, { pHMin: { type: 'number', value: 6, unit: '' } }), 'pHMax'],
    ['a temperature in the wrong unit', rateLawEntry({ k1_per_M_s: { value: 1 } }, { temperature_K: { type: 'number', value: 25, unit: 'K' } }), 'temperature_K'],
    ['a field of another kind', rateLawEntry({ k1_per_M_s: { value: 1 } }, { halfLife: { type: 'quantity', kind: '=', value: 1, se: null, unit: 'h' } }), 'halfLife'],
  ])('refuses %s and says what is accepted', (_, entry, field) => {
    const problems = validateEntry(rateLaw!, entry, context)
    expect(problems.map(one => one.field)).toContain(field)
    for (const { message, accepted } of problems) expect([message.length > 5, accepted.length > 1]).toEqual([true, true])
  })
})

describe('half-life in acid and the zinc–phosphate index as records', () => {
  const acid: RecordEntry = { acid_M: { type: 'number', value: 100, unit: 'mM' }, acid: { type: 'choice', choice: 'HCl' }, temperature_K: { type: 'number', value: 298.15, unit: 'K' } }
  it('stores 338 h in 0.1 M acid in seconds and writes it as days [338 · 3600 s]', () => {
    const entry: RecordEntry = { ...acid, halfLife: { type: 'quantity', kind: '=', value: 338, se: 10, unit: 'h' } }
    expect(emitted(acidHalfLife!, entry).halfLifeAcid_s!.value).toMatchObject({ value: 338 * 3600, se: 36_000, unit: 's' })
    expect(conditionsOf(acidHalfLife!, entry)).toMatchObject({ acid_M: 0.1, temperature_K: 298.15 })
    expect(acidHalfLife!.summarise(entry, context)).toContain('14.1')
  })

  const index: RecordEntry = {
    measuredOn: { type: 'choice', choice: 'itself' }, b0_T: { type: 'number', value: 20, unit: 'MHz' }, rate1Dia_per_s: { type: 'number', value: 0.37, unit: 's^-1' }, complex_mM: { type: 'number', value: 2.5, unit: 'mM' },
    zinc_mM: { type: 'number', value: 2.5, unit: 'mM' }, phosphate_mM: { type: 'number', value: 67, unit: 'mM' }, pH: { type: 'number', value: 7, unit: '' }, temperature_K: { type: 'number', value: 37, unit: '°C' },
    buffer: { type: 'text', text: 'phosphate' },
  }
  it('keeps "0.80 not reached in 72 h" as more than, never as a number [Laurent 2001]', () => {
    const entry: RecordEntry = { ...index, timeTo080: { type: 'quantity', kind: '>', value: 72, se: null, unit: 'h' } }
    const evidence = emitted(zincPhosphateRatio!, entry)
    expect(evidence.zincPhosphateTime080_s!.value).toMatchObject({ kind: '>', value: 259_200 })
    expect(evidence.zincPhosphateRatio).toBeUndefined()
    expect(zincPhosphateRatio!.summarise(entry, context)).toContain('not reached')
  })

  it('asks for the gadolinium analogue of a europium complex, whose own rate is too small', () => {
    const entry: RecordEntry = { ...index, ratioAt72h: { type: 'quantity', kind: '=', value: 0.97, se: 0.01, unit: '' } }
    expect(validateEntry(zincPhosphateRatio!, entry, { ...context, metal: 'Eu' })).toEqual([expect.objectContaining({ field: 'measuredOn', accepted: 'its gadolinium analogue' })])
    expect(validateEntry(zincPhosphateRatio!, { ...entry, measuredOn: { type: 'choice', choice: 'analogue' } }, { ...context, metal: 'Eu' })).toEqual([])
  })
})

describe('a challenge as a record', () => {
  const conditions: RecordEntry = { against: { type: 'choice', choice: 'serum' }, temperature_K: { type: 'number', value: 37, unit: '°C' } }
  it('keeps a share above the detection limit as a bound, with its time, and a half-life beside it', () => {
    const evidence = emitted(challenge!, { ...conditions, intact: { type: 'quantity', kind: '>', value: 98, se: null, unit: '%' }, after_s: { type: 'number', value: 72, unit: 'h' }, halfLife: { type: 'quantity', kind: '>', value: 100, se: null, unit: 'd' } })
    expect(evidence.intactInChallenge_frac!.value).toMatchObject({ value: 0.98, kind: '>', se: null })
    expect(evidence.intactInChallenge_frac!.conditions).toMatchObject({ against: 'serum', after_s: 259_200, temperature_K: 310.15 })
    expect(evidence.halfLifeChallenge_s!.value).toMatchObject({ value: 8_640_000, kind: '>' })
  })
  it.each([
    ['neither value', {}, 'intact'],
    ['a share without its time', { intact: { type: 'quantity', kind: '=', value: 40, se: 2, unit: '%' } }, 'after_s'],
    ['a competitor without a name', { halfLife: { type: 'quantity', kind: '=', value: 3, se: null, unit: 'h' }, against: { type: 'choice', choice: 'ligand' } }, 'competitor'],
    ['more than all', { intact: { type: 'quantity', kind: '=', value: 140, se: 2, unit: '%' }, after_s: { type: 'number', value: 1, unit: 'h' } }, 'intact'],
  ] as const)('is refused for %s', (_, more, field) => {
    expect(validateEntry(challenge!, { ...conditions, ...more } as RecordEntry, context).map(problem => problem.field)).toContain(field)
  })
  it('says in one line what was challenged how', () => {
    const entry: RecordEntry = { against: { type: 'choice', choice: 'ligand' }, competitor: { type: 'text', text: 'EDTA' }, equivalents: { type: 'number', value: 100, unit: '' }, temperature_K: { type: 'number', value: 37, unit: '°C' }, intact: { type: 'quantity', kind: '=', value: 91.5, se: 0.8, unit: '%' }, after_s: { type: 'number', value: 24, unit: 'h' } }
    expect(challenge!.summarise(entry, context)).toBe('91.50 ± 0.80\u00A0% intact after 24\u00A0h')
    expect(challenge!.describe(conditionsOf(challenge!, entry))).toBe('100 equivalents of EDTA, 37\u00A0°C')
  })
})

describe('formation as a record', () => {
  const conditions: RecordEntry = { temperature_K: { type: 'number', value: 25, unit: '°C' } }
  it('gives the rate constant with hydroxide and the time to 99 % with its pH and excess', () => {
    const evidence = emitted(formation!, {
      ...conditions, rateOH: { type: 'quantity', kind: '=', value: 5.9e6, se: 2e5, unit: 'M^-1 s^-1' }, time99: { type: 'quantity', kind: '<', value: 10, se: null, unit: 'min' },
      pH: { type: 'number', value: 5.5, unit: '' }, excess: { type: 'number', value: 20, unit: '' },
    })
    expect(evidence.kOH_per_M_s!.value).toMatchObject({ value: 5.9e6, se: 2e5 })
    expect(evidence.formationTime99_s!.value).toMatchObject({ value: 600, kind: '<' })
    expect(evidence.formationTime99_s!.conditions).toMatchObject({ pH: 5.5, excess: 20, temperature_K: 298.15 })
  })
  it('refuses a time to 99 % without pH or excess, and a record without a value', () => {
    expect(validateEntry(formation!, { ...conditions, time99: { type: 'quantity', kind: '=', value: 10, se: null, unit: 'min' } }, context).map(problem => problem.field)).toEqual(['pH', 'excess'])
    expect(validateEntry(formation!, conditions, context).map(problem => problem.field)).toEqual(['rateOH'])
  })
})
