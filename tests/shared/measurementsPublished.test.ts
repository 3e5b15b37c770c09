import { describe, expect, it } from 'vitest'
import { relaxFitted } from '#shared/measurements/relaxFitted'
import type { Conditions } from '#shared/measurements/types'
import { blocking, understandUpload } from './measurementsSupport'

/** What the published page says beside its table, and what had to be assumed to fill the form. */
const FORM = { instrument: 'not named', pH: 7, concBasis: 'nominal', concScaleError_frac: 0 }

function relaxivityOf(file: string, conditions: Conditions = {}) {
  const understood = understandUpload(file, relaxFitted, { conditions: { ...FORM, ...conditions }, lot: 'published' })
  expect(blocking(understood)).toEqual([])
  const part = understood.series[0]
  if (part === undefined) throw new Error('no series')
  const input = { kind: relaxFitted.kind, conditions: understood.conditions, tubes: part.tubes, exclusions: [], modelId: relaxFitted.defaultModel(understood.conditions), options: {}, seed: 'published' }
  const outcome = relaxFitted.analyse(input)
  if (!outcome.ok) throw new Error(outcome.message)
  return { understood, outcome, evidence: relaxFitted.evidence(outcome, input)[0] }
}

describe('tables that nobody here wrote give the relaxivity that others published', () => {
  it('Ni(II): r1 within 20 % of 0.70 per mM per s [salt array of Stupic et al. 2021 against phantom handbooks, both from memory]', () => {
    const { evidence, understood } = relaxivityOf('published/nickel-chloride-t1.csv')
    expect(understood.tubes).toHaveLength(14)
    expect(evidence).toMatchObject({ quantity: 'r1_per_mM_s', conditions: { b0_T: 3, temperature_K: 293.15, medium: 'water', mediumClass: 'aqueous' } })
    expect(Math.abs((evidence?.value.value ?? 0) / 0.70 - 1)).toBeLessThan(0.2)
  })

  it('Mn(II): r2 within 5 % of 108.3 per mM per s [salt array of Stupic et al. 2021 against Thangavel & Saritas 2017, both from memory]', () => {
    const { evidence, outcome } = relaxivityOf('published/manganese-chloride-t2.csv')
    expect(evidence?.quantity).toBe('r2_per_mM_s')
    expect(Math.abs((evidence?.value.value ?? 0) / 108.266 - 1)).toBeLessThan(0.05)
    expect(outcome.flags.map(flag => flag.id)).toEqual(expect.arrayContaining(['unweighted', 'noBlank']))
  })
})
