import { exactLog } from './exactMath'

/** A stream of pseudo-random numbers: the same seed gives the same stream, bit for bit, in every engine. */
export interface RandomSource {
  /** Uniform on the integers 0 … 2³² − 1. */
  nextUint32: () => number
  /** Uniform on [0, 1) in steps of 2⁻⁵³. */
  uniform: () => number
  /** Standard normal deviate. */
  normal: () => number
}

/**
 * Makes a stream (xoshiro128** on four 32-bit words, filled from the seed by a splitmix generator).
 * @param seed any text or finite number; 1 and '1' are the same seed
 * @source Blackman & Vigna, ACM Trans. Math. Softw. 47, 36 (2021)
 */
export function createRandom(seed: string | number): RandomSource {
  const next = splitmix32(hashSeed(String(seed)))
  return createRandomFromState([next(), next(), next(), next()])
}

/** The same from a given state of four 32-bit words, not all zero. */
export function createRandomFromState(state: readonly [number, number, number, number]): RandomSource {
  const nextUint32 = xoshiro128(state)
  const uniform = () => {
    const high = nextUint32() >>> 5
    const low = nextUint32() >>> 6
    return (high * 67108864 + low) / 9007199254740992
  }
  return { nextUint32, uniform, normal: normalFrom(uniform) }
}

/** A seed for a part of the work, so that adding a draw in one part moves no number in another. */
export function deriveSeed(seed: string | number, ...parts: readonly (string | number)[]): string {
  // The length before each part keeps ('a', 'bc') apart from ('ab', 'c').
  const text = [seed, ...parts].map(part => `${String(part).length}:${part}`).join('/')
  const next = splitmix32(hashSeed(text))
  return Array.from({ length: 4 }, () => next().toString(16).padStart(8, '0')).join('')
}

/** FNV-1a over UTF-16 code units, one pass from each end, folded to 32 bits by two words. */
function hashSeed(text: string): readonly [number, number] {
  let forward = 0x811C9DC5
  let backward = 0x01000193 ^ text.length
  for (let i = 0; i < text.length; i++) {
    forward = Math.imul(forward ^ text.charCodeAt(i), 0x01000193)
    backward = Math.imul(backward ^ text.charCodeAt(text.length - 1 - i), 0x01000193)
  }
  return [forward >>> 0, backward >>> 0]
}

function splitmix32(seed: readonly [number, number]): () => number {
  let counter = seed[0]
  // An odd step walks through all 2³² values; taking it from the second word makes 2⁶³ streams.
  const step = (seed[1] << 1) | 1
  return () => {
    counter = (counter + step) | 0
    let z = counter ^ seed[1]
    z = Math.imul(z ^ (z >>> 16), 0x85EBCA6B)
    z = Math.imul(z ^ (z >>> 13), 0xC2B2AE35)
    return (z ^ (z >>> 16)) >>> 0
  }
}

function xoshiro128(state: readonly [number, number, number, number]): () => number {
  let [a, b, c, d] = state
  return () => {
    const scrambled = Math.imul(rotateLeft(Math.imul(b, 5), 7), 9) >>> 0
    const shifted = b << 9
    c ^= a
    d ^= b
    b ^= c
    a ^= d
    c ^= shifted
    d = rotateLeft(d, 11)
    return scrambled
  }
}

function rotateLeft(x: number, by: number): number {
  return (x << by) | (x >>> (32 - by))
}

/** Polar method: only log and √ are needed, and both give the same bits everywhere. */
function normalFrom(uniform: () => number): () => number {
  let spare: number | null = null
  return () => {
    if (spare !== null) {
      const kept = spare
      spare = null
      return kept
    }
    for (;;) {
      const u = 2 * uniform() - 1
      const v = 2 * uniform() - 1
      const s = u * u + v * v
      if (s >= 1 || s === 0) continue
      const factor = Math.sqrt((-2 * exactLog(s)) / s)
      spare = v * factor
      return u * factor
    }
  }
}
