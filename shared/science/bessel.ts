/**
 * Modified Bessel functions of the first kind, scaled: e^−u·I₀(u) and e^−u·I₁(u), u ≥ 0. Power series up to u = 24, above it the asymptotic series,
 * whose smallest term lies under e^−2u there. Relative accuracy about 1e-15.
 * @source Abramowitz & Stegun 9.6.10 and 9.7.1, from memory
 */
export function scaledBessel(u: number): { i0: number, i1: number } {
  if (!(u >= 0)) return { i0: NaN, i1: NaN }
  return u <= 24 ? bySeries(u) : { i0: byAsymptote(u, 0), i1: byAsymptote(u, 4) }
}

function bySeries(u: number): { i0: number, i1: number } {
  const quarter = (u * u) / 4
  let term = 1
  let i0 = 1
  let i1 = 1
  for (let k = 1; k < 200; k++) {
    term *= quarter / (k * k)
    i0 += term
    i1 += term / (k + 1)
    if (term < 1e-17 * i0) break
  }
  const scale = Math.exp(-u)
  return { i0: scale * i0, i1: (scale * i1 * u) / 2 }
}

/** @param mu 4ν² */
function byAsymptote(u: number, mu: number): number {
  let term = 1
  let sum = 1
  for (let k = 1; k < 60; k++) {
    const next = -term * (mu - (2 * k - 1) ** 2) / (k * 8 * u)
    if (Math.abs(next) >= Math.abs(term) && k > 1) break
    term = next
    sum += term
    if (Math.abs(term) < 1e-17 * Math.abs(sum)) break
  }
  return sum / Math.sqrt(2 * Math.PI * u)
}
