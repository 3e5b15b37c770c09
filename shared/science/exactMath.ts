/**
 * exp and log that give the same bits in every engine.
 *
 * `Math.exp` and `Math.log` are left to the engine and differ in the last bit between Node and browsers; `+ − × ÷` and `√` do not. Both
 * functions use only those, with the range reduction and the minimax coefficients of the published fdlibm algorithm.
 * @source fdlibm 5.3 (1995), the algorithm and constants of e_exp.c and e_log.c
 */
const LN2_HIGH = 6.93147180369123816490e-1
const LN2_LOW = 1.90821492927058770002e-10
const INVERSE_LN2 = 1.44269504088896338700
const EXP_OVERFLOW = 7.09782712893383973096e2
const EXP_UNDERFLOW = -7.45133219101941108420e2

const bits = new DataView(new ArrayBuffer(8))

const SMALLEST_POWER = -1074
/** 2^k from the smallest to the largest double, by doubling, which is exact. */
const powers = new Float64Array(1023 - SMALLEST_POWER + 1)
powers[0] = 5e-324
for (let k = 1; k < powers.length; k++) powers[k] = 2 * powers[k - 1]!

/** x·2^k, in two steps where 2^k itself is no normal double. */
function scale(x: number, k: number): number {
  if (k > 1023) return x * 2 * powers[k - 1 - SMALLEST_POWER]!
  if (k < -1021) return x * powers[k + 1000 - SMALLEST_POWER]! * powers[-1000 - SMALLEST_POWER]!
  return x * powers[k - SMALLEST_POWER]!
}

/**
 * e^x within 1 ulp.
 * @param x any number; NaN gives NaN, above 709.78 gives +∞, below −745.13 gives 0
 */
export function exactExp(x: number): number {
  if (!(x > -700 && x < 700)) return atTheEnds(x)
  // Zero for the smallest arguments, which the formula then leaves as they are.
  const k = (INVERSE_LN2 * x + (x < 0 ? -0.5 : 0.5)) | 0
  const high = x - k * LN2_HIGH
  const low = k * LN2_LOW
  const r = high - low
  const t = r * r
  const c = r - t * (1.66666666666666019037e-1 + t * (-2.77777777770155933842e-3 + t * (6.61375632143793436117e-5
    + t * (-1.65339022054652515390e-6 + t * 4.13813679705723846039e-8))))
  return (1 - ((low - (r * c) / (2 - c)) - high)) * powers[k - SMALLEST_POWER]!
}

/** e^x over 2^k, for k next to x/ln 2. */
function reduced(x: number, k: number): number {
  const high = x - k * LN2_HIGH
  const low = k * LN2_LOW
  const r = high - low
  const t = r * r
  const c = r - t * (1.66666666666666019037e-1 + t * (-2.77777777770155933842e-3 + t * (6.61375632143793436117e-5
    + t * (-1.65339022054652515390e-6 + t * 4.13813679705723846039e-8))))
  return 1 - ((low - (r * c) / (2 - c)) - high)
}

function atTheEnds(x: number): number {
  if (Number.isNaN(x)) return x
  if (x > EXP_OVERFLOW) return Infinity
  if (x < EXP_UNDERFLOW) return 0
  const k = Math.trunc(INVERSE_LN2 * x + (x < 0 ? -0.5 : 0.5))
  return scale(reduced(x, k), k)
}

/**
 * Natural logarithm within 1 ulp.
 * @param x > 0; 0 gives −∞, a negative number or NaN gives NaN, +∞ gives +∞
 */
export function exactLog(x: number): number {
  if (!(x >= 0)) return NaN
  if (x === 0) return -Infinity
  if (x === Infinity) return x
  const { k, f } = splitAtRootHalf(x)
  if (f === 0) return k * LN2_HIGH + k * LN2_LOW
  const s = f / (2 + f)
  const z = s * s
  const w = z * z
  const even = w * (3.999999999940941908e-1 + w * (2.222219843214978396e-1 + w * 1.531383769920937332e-1))
  const odd = z * (6.666666666666735130e-1 + w * (2.857142874366239149e-1 + w * (1.818357216161805012e-1 + w * 1.479819860511658591e-1)))
  const remainder = even + odd
  const half = 0.5 * f * f
  return k * LN2_HIGH - ((half - (s * (half + remainder) + k * LN2_LOW)) - f)
}

/** x = 2^k·(1 + f) with √2/2 ≤ 1 + f < √2. */
function splitAtRootHalf(x: number): { k: number, f: number } {
  let k = 0
  let normal = x
  if (x < 2.2250738585072014e-308) {
    k = -54
    normal = x * 2 ** 54
  }
  bits.setFloat64(0, normal)
  const high = bits.getUint32(0)
  const mantissa = high & 0xFFFFF
  // Adds 1 to the exponent when the mantissa is above √2: 0x95F64 is the gap from √2's mantissa to the next power of two.
  const above = (mantissa + 0x95F64) & 0x100000
  k += (high >>> 20) - 1023 + (above >>> 20)
  bits.setUint32(0, mantissa | (above ^ 0x3FF00000))
  return { k, f: bits.getFloat64(0) - 1 }
}
