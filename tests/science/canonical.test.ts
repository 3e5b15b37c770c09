import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { canonicalJson, parseCanonicalJson } from '../../shared/science/canonical'

describe('canonical JSON', () => {
  it('sorts keys at every depth and writes no white space [definition]', () => {
    expect(canonicalJson({ b: [1, { d: null, c: 'x' }], a: true })).toBe('{"a":true,"b":[1,{"c":"x","d":null}]}')
  })
  it('gives equal text whatever the order the keys were set in [property]', () => {
    fc.assert(fc.property(fc.dictionary(fc.string(), fc.double({ noNaN: true, noDefaultInfinity: true })), (record) => {
      expect(canonicalJson(Object.fromEntries(Object.entries(record).reverse()))).toBe(canonicalJson(record))
    }), { seed: 1 })
  })
  it('brings back the same bits for every finite double, minus zero included [ECMA-262: shortest round trip]', () => {
    fc.assert(fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (x) => {
      expect(Object.is(parseCanonicalJson(canonicalJson(x)), x)).toBe(true)
    }), { seed: 2, numRuns: 2000 })
    expect(canonicalJson([-0, 0, 5e-324, 0.1 + 0.2])).toBe('[-0,0,5e-324,0.30000000000000004]')
  })
  it('names the path of what JSON would drop or change', () => {
    expect(() => canonicalJson({ points: [{ y: 1 }, { y: NaN }] })).toThrow('NaN at $.points[1].y')
    expect(() => canonicalJson([1, Infinity])).toThrow('Infinity at $[1]')
    expect(() => canonicalJson({ a: undefined })).toThrow('undefined at $.a')
    expect(() => canonicalJson({ a: Float64Array.of(1) })).toThrow('Float64Array at $.a')
    expect(() => canonicalJson({ at: new Date(0) })).toThrow('Date at $.at')
    expect(() => canonicalJson([1n])).toThrow('bigint at $[0]')
    expect(() => canonicalJson({ [Symbol('s')]: 1 })).toThrow('symbol key at $')
    // eslint-disable-next-line no-sparse-arrays -- the hole is what is tested
    expect(() => canonicalJson([1, , 2])).toThrow('undefined at $[1]')
    const loop: Record<string, unknown> = {}
    loop.inner = { loop }
    expect(() => canonicalJson(loop)).toThrow('cycle at $.inner.loop')
  })
  it('lets one object stand in two places', () => {
    const shared = { a: 1 }
    expect(canonicalJson([shared, shared])).toBe('[{"a":1},{"a":1}]')
  })
  it('refuses to read text that is not canonical', () => {
    for (const text of ['{"b":1,"a":2}', '{"a": 1}', '1.0', '{"a":1,"a":2}', '1e3']) expect(() => parseCanonicalJson(text)).toThrow(TypeError)
    expect(() => parseCanonicalJson('{')).toThrow(SyntaxError)
    expect(parseCanonicalJson('{"a":[1,-0.5,"é"]}')).toEqual({ a: [1, -0.5, 'é'] })
  })
})
