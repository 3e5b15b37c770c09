import { describe, expect, it } from 'vitest'
import { CHECK_STATES, type CheckEvent, type CheckState, mayFollow, needsComment, secondSignatureReason } from '../../shared/checks/transitions'

/** The table of architecture.md, "States", typed out on its own: what may follow what. */
const ALLOWED: Record<CheckState, CheckEvent[]> = {
  draft: ['waiting'], waiting: ['firstSigned', 'signed', 'returned', 'recalled'], firstSigned: ['signed', 'returned', 'recalled'], signed: ['withdrawn'],
  returned: ['waiting'], recalled: ['waiting'], withdrawn: ['waiting'],
}
const EVENTS = CHECK_STATES.filter(state => state !== 'draft')

describe('states of a check', () => {
  for (const state of CHECK_STATES) {
    for (const event of EVENTS) {
      const allowed = ALLOWED[state].includes(event)
      it(`${state} → ${event} is ${allowed ? 'allowed' : 'refused'} [architecture: states]`, () => expect(mayFollow(state, event)).toBe(allowed))
    }
  }

  it('ask for words exactly where a number comes back or goes, and where that is answered [architecture: states]', () => {
    const asked = CHECK_STATES.flatMap(state => EVENTS.filter(event => mayFollow(state, event) && needsComment(state, event)).map(event => `${state} ${event}`))
    expect(asked).toEqual(['waiting returned', 'firstSigned returned', 'signed withdrawn', 'returned waiting', 'withdrawn waiting'])
  })
})

describe('a second signature [product: check 4]', () => {
  const ground = (more: Partial<Parameters<typeof secondSignatureReason>[0]>) => secondSignatureReason({ points: 100, pointsLeftOut: 0, first: { value: 4, se: 0.1 }, now: { value: 4 }, ...more })

  it('is asked for above a fifth of the points, not at a fifth', () => {
    expect(ground({ pointsLeftOut: 20 })).toBeNull()
    expect(ground({ pointsLeftOut: 21 })).toBe('21 of 100 points are left out, more than a fifth')
  })
  it('is asked for where the slope moved by more than two standard errors of the first version, in either direction', () => {
    expect(ground({ now: { value: 4.19 } })).toBeNull()
    expect(ground({ now: { value: 4.21 } })).toContain('2.1 standard errors')
    expect(ground({ now: { value: 3.75 } })).toContain('2.5 standard errors')
  })
  it('rests on the points alone where there is no first slope, or none with an error', () => {
    expect(ground({ first: null, now: { value: 9 } })).toBeNull()
    expect(ground({ first: { value: 4, se: null }, now: { value: 9 } })).toBeNull()
    expect(ground({ first: null, pointsLeftOut: 50 })).not.toBeNull()
  })
})
