/**
 * Writes shared/science/exchange/kernel2.ts to kernel4.ts: small-matrix arithmetic with every loop written out, as plain source, because a content security
 * policy forbids code made at run time. Run again only when this script changes: npx tsx scripts/makeExchangeKernels.ts
 *
 * The matrices are those of the symmetrised Bloch–McConnell equations (see exchange/poolSystem.ts), kept as the symmetric G = P·F with P = diag(1, −1, 1) per pool:
 * the upper triangle by row. Products of matrices that commute stay in that form, which halves their work.
 * Each function reads its matrices into constants and writes to another array: twice as fast as turning in place, where the registers do not suffice.
 */
import { writeFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'

class Layout {
  readonly n: number
  readonly size: number
  constructor(readonly pools: number) {
    this.n = 3 * pools
    this.size = (this.n * (this.n + 1)) / 2
  }

  /** Place of entry (i, j) in the packed upper triangle. */
  at(i: number, j: number): number {
    const [a, b] = i < j ? [i, j] : [j, i]
    return a * this.n - (a * (a - 1)) / 2 + (b - a)
  }

  isNegative(i: number): boolean {
    return i % 3 === 1
  }

  /** Whether the entry can differ from zero in the matrix of the equations: solutes exchange with water only. */
  isFilled(i: number, j: number): boolean {
    const [a, b] = i < j ? [i, j] : [j, i]
    if (Math.floor(a / 3) === Math.floor(b / 3)) return b - a < 2
    return a < 3 && b % 3 === a
  }

  upper(): [number, number][] {
    const pairs: [number, number][] = []
    for (let i = 0; i < this.n; i++) for (let j = i; j < this.n; j++) pairs.push([i, j])
    return pairs
  }

  /** Terms of (F₁·F₂) in G form at (i, j): Σ ±a(i,k)·b(k,j). */
  product(a: (i: number, k: number) => string | null, b: (k: number, j: number) => string | null, i: number, j: number): string {
    let text = ''
    for (let k = 0; k < this.n; k++) {
      const [left, right] = [a(i, k), b(k, j)]
      if (left === null || right === null) continue
      const sign = this.isNegative(k) ? '-' : text === '' ? '' : '+'
      text += `${text === '' ? sign : ` ${sign} `}${left} * ${right}`
    }
    return text === '' ? '0' : text
  }
}

const load = (l: Layout, name: string, pick: (i: number, j: number) => boolean = () => true): string[] =>
  l.upper().filter(([i, j]) => pick(i, j)).map(([i, j]) => `  const ${name}${l.at(i, j)} = ${name}[${l.at(i, j)}]!`)
const dense = (l: Layout, name: string) => (i: number, j: number): string => `${name}${l.at(i, j)}`
const sparse = (l: Layout, name: string) => (i: number, j: number): string | null => l.isFilled(i, j) ? `${name}${l.at(i, j)}` : null
const M = 'Float64Array'

function square(l: Layout): string {
  const g = dense(l, 'g')
  return `/** out = g²; out is another array than g. */
export function square(out: ${M}, g: ${M}): void {
${load(l, 'g').join('\n')}
${l.upper().map(([i, j]) => `  out[${l.at(i, j)}] = ${l.product(g, g, i, j)}`).join('\n')}
}
`
}

function powers(l: Layout): string {
  const a = sparse(l, 'a')
  return `/** Second and third power of the matrix of the equations, whose zeros are skipped, and lead = c0·1 + c1·a + c2·a² + c3·a³. */
export function powers(a: ${M}, second: ${M}, third: ${M}, lead: ${M}, c: readonly [number, number, number, number]): void {
  const [c0, c1, c2, c3] = c
${load(l, 'a', (i, j) => l.isFilled(i, j)).join('\n')}
${l.upper().map(([i, j]) => `  const s${l.at(i, j)} = ${l.product(a, a, i, j)}`).join('\n')}
${l.upper().map(([i, j]) => `  const t${l.at(i, j)} = ${l.product(a, dense(l, 's'), i, j)}`).join('\n')}
${l.upper().map(([i, j]) => `  second[${l.at(i, j)}] = s${l.at(i, j)}\n  third[${l.at(i, j)}] = t${l.at(i, j)}`).join('\n')}
${l.upper().map(([i, j]) => `  lead[${l.at(i, j)}] = c2 * s${l.at(i, j)} + c3 * t${l.at(i, j)}${a(i, j) === null ? '' : ` + c1 * ${a(i, j)}`}${one(l, i, j)}`).join('\n')}
}
`
}

const one = (l: Layout, i: number, j: number): string => i !== j ? '' : l.isNegative(i) ? ' - c0' : ' + c0'

/** Row and column z of water: where the direction of the derivative of Z can differ from zero. */
const DIRECTION = 2

function powersDerivative(l: Layout): string {
  const a = sparse(l, 'a')
  const d = (i: number, j: number): string | null => i === DIRECTION || j === DIRECTION ? `d${l.at(i, j)}` : null
  return `/** The derivatives of the same in a direction d that is zero but in row and column z of water. */
export function powersDerivative(a: ${M}, second: ${M}, d: ${M}, dSecond: ${M}, dThird: ${M}, dLead: ${M}, c: readonly [number, number, number, number]): void {
  const [, c1, c2, c3] = c
${load(l, 'a', (i, j) => l.isFilled(i, j)).join('\n')}
${load(l, 'd', (i, j) => d(i, j) !== null).join('\n')}
${l.upper().filter(([, j]) => j >= DIRECTION).map(([i, j]) => `  const q${l.at(i, j)} = second[${l.at(i, j)}]!`).join('\n')}
${l.upper().map(([i, j]) => `  const s${l.at(i, j)} = ${l.product(a, d, i, j)} + (${l.product(d, a, i, j)})`).join('\n')}
${l.upper().map(([i, j]) => `  const t${l.at(i, j)} = ${l.product(a, dense(l, 's'), i, j)} + (${l.product(d, dense(l, 'q'), i, j)})`).join('\n')}
${l.upper().map(([i, j]) => `  dSecond[${l.at(i, j)}] = s${l.at(i, j)}\n  dThird[${l.at(i, j)}] = t${l.at(i, j)}`).join('\n')}
${l.upper().map(([i, j]) => `  dLead[${l.at(i, j)}] = c2 * s${l.at(i, j)} + c3 * t${l.at(i, j)}${d(i, j) === null ? '' : ` + c1 * d${l.at(i, j)}`}`).join('\n')}
}
`
}

function fold(l: Layout): string {
  return `/** out = a·b + c0·1 + c1·x + c2·y, for matrices that commute; c is [c0, c1, c2]. */
export function fold(out: ${M}, a: ${M}, b: ${M}, c: readonly [number, number, number], x: ${M}, y: ${M}): void {
  const [c0, c1, c2] = c
${load(l, 'a').join('\n')}
${load(l, 'b').join('\n')}
${l.upper().map(([i, j]) => `  out[${l.at(i, j)}] = ${l.product(dense(l, 'a'), dense(l, 'b'), i, j)} + c1 * x[${l.at(i, j)}]! + c2 * y[${l.at(i, j)}]!${one(l, i, j)}`).join('\n')}
}
`
}

function foldBoth(l: Layout): string {
  return `/** out = a·db + da·b + c1·x + c2·y where the whole is symmetric in G form, though its parts are not: the derivative of a product. c is [–, c1, c2]. */
export function foldBoth(out: ${M}, a: ${M}, da: ${M}, b: ${M}, db: ${M}, c: readonly [number, number, number], x: ${M}, y: ${M}): void {
  const [, c1, c2] = c
${['a', 'da', 'b', 'db'].flatMap(name => load(l, name)).join('\n')}
${l.upper().map(([i, j]) => `  out[${l.at(i, j)}] = ${l.product(dense(l, 'a'), dense(l, 'db'), i, j)} + (${l.product(dense(l, 'da'), dense(l, 'b'), i, j)}) + c1 * x[${l.at(i, j)}]! + c2 * y[${l.at(i, j)}]!`).join('\n')}
}
`
}

function squareDerivative(l: Layout): string {
  const g = dense(l, 'g')
  const d = dense(l, 'd')
  return `/** out = g·d + d·g, the derivative of g² in the direction d; out is another array than both. */
export function squareDerivative(out: ${M}, g: ${M}, d: ${M}): void {
${load(l, 'g').join('\n')}
${load(l, 'd').join('\n')}
${l.upper().map(([i, j]) => `  out[${l.at(i, j)}] = ${i === j ? `2 * (${l.product(g, d, i, j)})` : `${l.product(g, d, i, j)} + (${l.product(d, g, i, j)})`}`).join('\n')}
}
`
}

function apply(l: Layout): string {
  const all = Array.from({ length: l.n }, (_, i) => i)
  return `/** out = F·v; out is another array than v. */
export function apply(out: ${M}, g: ${M}, v: ${M}): void {
${load(l, 'g').join('\n')}
${all.map(i => `  const v${i} = v[${i}]!`).join('\n')}
${all.map((i) => {
  const sum = all.map(j => `g${l.at(i, j)} * v${j}`).join(' + ')
  return `  out[${i}] = ${l.isNegative(i) ? `-(${sum})` : sum}`
}).join('\n')}
}
`
}

/** LDLᵀ without pivots: G of the equations is quasi-definite (x and z negative, y positive definite), so it exists in any order. Solutes first, which fills least. */
function steady(l: Layout): string {
  const order = [0, 1, 2].flatMap(axis => [...Array.from({ length: l.pools - 1 }, (_, p) => 3 * (p + 1) + axis), axis])
  const names = new Map<string, string>()
  const key = (i: number, j: number) => `${Math.min(i, j)},${Math.max(i, j)}`
  for (const [i, j] of l.upper()) if (l.isFilled(i, j)) names.set(key(i, j), `a${l.at(i, j)}`)
  const lines: string[] = []
  let count = 0
  const back: string[] = []
  const changed = new Set<number>()
  order.forEach((pivot, step) => {
    const later = order.slice(step + 1).filter(j => names.has(key(pivot, j)))
    lines.push(`  const p${pivot} = 1 / ${names.get(key(pivot, pivot))!}`)
    const factors = later.map((j) => {
      const name = `f${count++}`
      lines.push(`  const ${name} = ${names.get(key(pivot, j))!} * p${pivot}`)
      return name
    })
    later.forEach((j, b) => {
      for (let a = b; a < later.length; a++) {
        const i = later[a]!
        const old = names.get(key(i, j))
        const fresh = `e${count++}`
        lines.push(`  const ${fresh} = ${old ?? ''}${old ? ' - ' : '-'}${factors[a]!} * ${names.get(key(pivot, j))!}`)
        names.set(key(i, j), fresh)
      }
    })
    later.forEach((j, b) => {
      lines.push(`  r${j} -= ${factors[b]!} * r${pivot}`)
      changed.add(j)
    })
    back.unshift(`  const x${pivot} = r${pivot} * p${pivot}${later.map((j, b) => ` - ${factors[b]!} * x${j}`).join('')}`)
  })
  return `/** Solves F·out = right for the matrix of the equations, whose rates R1 and R2 must be above zero. */
export function solveSparse(out: ${M}, a: ${M}, right: ${M}): void {
${load(l, 'a', (i, j) => l.isFilled(i, j)).join('\n')}
${Array.from({ length: l.n }, (_, i) => `  ${changed.has(i) ? 'let' : 'const'} r${i} = ${l.isNegative(i) ? '-' : ''}right[${i}]!`).join('\n')}
${lines.join('\n')}
${back.join('\n')}
${Array.from({ length: l.n }, (_, i) => `  out[${i}] = x${i}`).join('\n')}
}
`
}

/** Text of the kernel for so many pools, water included. */
export function kernelSource(pools: number): string {
  const l = new Layout(pools)
  return `/* eslint-disable max-lines */
/** Written by scripts/makeExchangeKernels.ts, which says what the arrays mean: change that, not this. ${pools} pools, ${l.n} × ${l.n}, ${l.size} numbers a matrix. */

${[square, powers, powersDerivative, fold, foldBoth, squareDerivative, apply, steady].map(make => make(l)).join('\n')}`
}

export const KERNEL_POOLS = [2, 3, 4]
export const kernelFile = (pools: number): string => fileURLToPath(new URL(`../shared/science/exchange/kernel${pools}.ts`, import.meta.url))

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  for (const pools of KERNEL_POOLS) writeFileSync(kernelFile(pools), kernelSource(pools))
}
