/** Most parameters of a small system; more gain nothing from small loops. */
export const QUICK_PARAMETERS = 4
/** Share of a column that must not lie in those before it, as a square: above it normal equations keep eleven digits. */
const PIVOT = 1e-4

const unit = new Float64Array(QUICK_PARAMETERS ** 2)
const pivots = new Float64Array(QUICK_PARAMETERS)

/**
 * Solves (N + λ·diag N)·step = right by LDLᵀ, which needs no scaling and no square root. N is given by row, its lower half filled.
 * @returns false where a column depends too nearly on those before it, or is zero
 */
export function solveNormal(m: number, normal: Float64Array, right: Float64Array, damping: number, step: Float64Array): boolean {
  if (m === 3) return solveThree(normal, right, damping, step)
  if (m === 2) return solveTwo(normal, right, damping, step)
  return solveAny(m, normal, right, damping, step)
}

function solveAny(m: number, normal: Float64Array, right: Float64Array, damping: number, step: Float64Array): boolean {
  for (let a = 0; a < m; a++) {
    const whole = normal[a * m + a]!
    let pivot = whole * (1 + damping)
    for (let b = 0; b < a; b++) {
      let entry = normal[a * m + b]!
      for (let l = 0; l < b; l++) entry -= unit[a * m + l]! * unit[b * m + l]! * pivots[l]!
      unit[a * m + b] = entry / pivots[b]!
      pivot -= unit[a * m + b]! * entry
    }
    if (!(pivot > PIVOT * whole && whole < Infinity)) return false
    pivots[a] = pivot
  }
  for (let a = 0; a < m; a++) {
    let value = right[a]!
    for (let l = 0; l < a; l++) value -= unit[a * m + l]! * step[l]!
    step[a] = value
  }
  for (let a = m - 1; a >= 0; a--) {
    let value = step[a]! / pivots[a]!
    for (let l = a + 1; l < m; l++) value -= unit[l * m + a]! * step[l]!
    step[a] = value
  }
  return true
}

/** The same for three parameters, in variables that stay in registers: most relaxation fits are these. */
function solveThree(normal: Float64Array, right: Float64Array, damping: number, step: Float64Array): boolean {
  const n00 = normal[0]!, n10 = normal[3]!, n11 = normal[4]!, n20 = normal[6]!, n21 = normal[7]!, n22 = normal[8]!
  const d0 = n00 * (1 + damping)
  if (!(d0 > 0 && d0 < Infinity)) return false
  const inverse0 = 1 / d0
  const l10 = n10 * inverse0
  const l20 = n20 * inverse0
  const d1 = n11 * (1 + damping) - l10 * n10
  if (!(d1 > PIVOT * n11 && n11 < Infinity)) return false
  const u21 = n21 - l20 * n10
  const l21 = u21 / d1
  const d2 = n22 * (1 + damping) - l20 * n20 - l21 * u21
  if (!(d2 > PIVOT * n22 && n22 < Infinity)) return false
  const y0 = right[0]!
  const y1 = right[1]! - l10 * y0
  const y2 = right[2]! - l20 * y0 - l21 * y1
  const s2 = y2 / d2
  const s1 = y1 / d1 - l21 * s2
  step[2] = s2
  step[1] = s1
  step[0] = y0 * inverse0 - l10 * s1 - l20 * s2
  unit[3] = l10
  unit[6] = l20
  unit[7] = l21
  pivots[0] = d0
  pivots[1] = d1
  pivots[2] = d2
  return true
}

/** The same for two parameters. */
function solveTwo(normal: Float64Array, right: Float64Array, damping: number, step: Float64Array): boolean {
  const n00 = normal[0]!, n10 = normal[2]!, n11 = normal[3]!
  const d0 = n00 * (1 + damping)
  if (!(d0 > 0 && d0 < Infinity)) return false
  const l10 = n10 / d0
  const d1 = n11 * (1 + damping) - l10 * n10
  if (!(d1 > PIVOT * n11 && n11 < Infinity)) return false
  const s1 = (right[1]! - l10 * right[0]!) / d1
  step[1] = s1
  step[0] = right[0]! / d0 - l10 * s1
  unit[2] = l10
  pivots[0] = d0
  pivots[1] = d1
  return true
}

/** Inverse of the matrix that `solveNormal` factored last, by row; a plain array, for a typed one costs more to make than to fill. */
export function invertNormal(m: number): readonly number[] {
  if (m === 3) return invertThree()
  if (m === 2) return invertTwo()
  return invertAny(m)
}

const column = new Float64Array(QUICK_PARAMETERS)

function invertAny(m: number): number[] {
  const inverse = new Array<number>(m * m).fill(0)
  for (let c = m - 1; c >= 0; c--) {
    // Column c of L⁻¹ from row c down, then Lᵀ solved upwards.
    for (let a = c; a < m; a++) {
      let value = a === c ? 1 : 0
      for (let l = c; l < a; l++) value -= unit[a * m + l]! * column[l]!
      column[a] = value
    }
    for (let a = m - 1; a >= c; a--) {
      let value = column[a]! / pivots[a]!
      for (let l = a + 1; l < m; l++) value -= unit[l * m + a]! * inverse[l * m + c]!
      inverse[a * m + c] = value
      inverse[c * m + a] = value
    }
  }
  return inverse
}

function invertThree(): number[] {
  const l10 = unit[3]!, l20 = unit[6]!, l21 = unit[7]!
  const i22 = 1 / pivots[2]!
  const i21 = -l21 * i22
  const i20 = -(l20 * i22 + l10 * i21)
  const i11 = 1 / pivots[1]! - l21 * i21
  const i10 = -(l10 * i11 + l20 * i21)
  return [1 / pivots[0]! - l10 * i10 - l20 * i20, i10, i20, i10, i11, i21, i20, i21, i22]
}

function invertTwo(): number[] {
  const i11 = 1 / pivots[1]!
  const i10 = -unit[2]! * i11
  return [1 / pivots[0]! - unit[2]! * i10, i10, i10, i11]
}
