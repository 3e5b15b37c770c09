import { describe, expect, it } from 'vitest'
import { changesOf, readMapQuery, writeMapQuery, type MapView } from '#shared/map/address'
import { DEFAULT_PROFILE } from '#shared/science/placement/profile'

const USUAL: MapView = { agent: null, shortlist: [], hidden: [], table: false, includesUnsigned: true, ellipses: true, front: true, profileId: null, changes: {} }

describe('the address of a map', () => {
  it('says nothing of what is as usual', () => {
    expect(writeMapQuery(USUAL)).toEqual({})
    expect(readMapQuery({})).toEqual(USUAL)
  })
  it('brings back every part of a view', () => {
    const view: MapView = {
      agent: 'SK-07', shortlist: ['SK-07', 'SK-11'], hidden: ['ring', 'signed'], table: true, includesUnsigned: false, ellipses: false, front: false, profileId: '01990000-0000-7000-8000-000000000001',
      changes: { deltaRate1_per_s: 0.30000000000000004, limitLoss_frac: 1e-5 },
    }
    expect(readMapQuery(writeMapQuery(view))).toEqual(view)
    expect(readMapQuery(Object.fromEntries(new URLSearchParams(new URLSearchParams(writeMapQuery(view)).toString())))).toEqual(view)
  })
  it('leaves out what is no number, outside its range, or no field of a profile', () => {
    expect(readMapQuery({ set: 'pH:99,b0_T:abc,nothing:1,pH:,temperature_K:300,__proto__:3' }).changes).toEqual({ temperature_K: 300 })
    expect(readMapQuery({ agent: ['a', 'b'], view: 7, off: '' })).toEqual(USUAL)
  })
  it('names the numbers that were changed', () => {
    expect(changesOf({ ...DEFAULT_PROFILE, pH: 7, name: 'other' }, DEFAULT_PROFILE)).toEqual({ pH: 7 })
  })
})
