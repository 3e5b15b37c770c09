import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'

/** Reads the shipped tokens and holds every pair that the screens use to its floor, in both themes. */
const css = readFileSync(new URL('../../assets/css/tokens.css', import.meta.url), 'utf8')
const tokens = new Map([...css.matchAll(/--([\w-]+): light-dark\((#[0-9A-F]{6}), (#[0-9A-F]{6})\)/g)].map(match => [match[1] ?? '', { light: match[2] ?? '', dark: match[3] ?? '' }]))
type Theme = 'light' | 'dark'
type Rgb = [number, number, number]

/** WCAG 2.2: relative luminance and contrast ratio. */
const linear = (hex: string): Rgb => [1, 3, 5].map((at) => {
  const part = Number.parseInt(hex.slice(at, at + 2), 16) / 255
  return part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4
}) as Rgb
const luminance = ([r, g, b]: Rgb): number => 0.2126 * r + 0.7152 * g + 0.0722 * b
const hexOf = (name: string, theme: Theme): string => {
  const token = tokens.get(name)
  if (!token) throw new Error(`tokens.css has no --${name}`)
  return token[theme]
}
function contrast(front: string, ground: string, theme: Theme): number {
  const [a, b] = [luminance(linear(hexOf(front, theme))), luminance(linear(hexOf(ground, theme)))]
  return (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05)
}

/** OKLab of linear RGB [Ottosson 2020], after a simulated colour vision deficiency [Machado, Oliveira, Fernandes 2009, severity 1; matrices from memory]. */
const DEFICIENCY: Record<string, readonly Rgb[]> = {
  none: [[1, 0, 0], [0, 1, 0], [0, 0, 1]],
  deuteranopia: [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.01182, 0.04294, 0.968881]],
  protanopia: [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]],
  tritanopia: [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.3039]],
}
const times = (matrix: readonly Rgb[], [a, b, c]: Rgb): Rgb => matrix.map(row => row[0] * a + row[1] * b + row[2] * c) as Rgb
function oklab(rgb: Rgb): Rgb {
  const cone = times([[0.4122214708, 0.5363325363, 0.0514459929], [0.2119034982, 0.6806995451, 0.1073969566], [0.0883024619, 0.2817188376, 0.6299787005]], rgb).map(Math.cbrt) as Rgb
  return times([[0.2104542553, 0.793617785, -0.0040720468], [1.9779984951, -2.428592205, 0.4505937099], [0.0259040371, 0.7827717662, -0.808675766]], cone)
}
function distance(one: string, other: string, theme: Theme, seen: keyof typeof DEFICIENCY): number {
  const lab = (name: string) => oklab(times(DEFICIENCY[seen] ?? [], linear(hexOf(name, theme))).map(part => Math.min(1, Math.max(0, part))) as Rgb)
  const [a, b] = [lab(one), lab(other)]
  return 100 * Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2])
}

const TEXT: readonly (readonly [string, readonly string[]])[] = [
  ['ink', ['pane', 'sunk', 'ground', 'pick', 'raised', 'm1']], ['ink-2', ['pane', 'sunk', 'ground', 'pick', 'raised', 'm1']], ['ink-3', ['pane', 'sunk', 'ground', 'pick', 'raised']],
  ['on-ink', ['ink']], ['iron-text', ['iron', 'iron-2']], ['iron-dim', ['iron']], ['iron-bright', ['iron', 'iron-2']], ['lamp-ink', ['lamp']], ['lamp-deep', ['pane', 'lamp-wash']],
  ['fault', ['pane', 'sunk', 'raised', 'fault-wash', 'm1']], ['on-fault', ['fault']], ['cest-text', ['pane']], ['t1', ['pane']], ['t2', ['pane']],
  ...['s1', 's2', 's3', 's4', 's5', 's6'].map(name => [name, ['pane']] as const),
]
const DRAWN: readonly (readonly [string, readonly string[]])[] = [
  ['edge', ['pane', 'raised']], ['axis', ['pane']], ['t1', ['m0', 'm1']], ['t2', ['m0', 'm1']], ['cest', ['m0', 'm1', 'pane']], ['lamp', ['iron']],
]
const pairs = (list: typeof TEXT) => (['light', 'dark'] as const).flatMap(theme => list.flatMap(([front, grounds]) => grounds.map(ground => ({ theme, front, ground }))))

describe('the colours', () => {
  it('has every token that Tailwind maps', async () => {
    const source = readFileSync(new URL('../../tailwind.config.ts', import.meta.url), 'utf8')
    const list = source.slice(source.indexOf('TOKENS = ['), source.indexOf(']', source.indexOf('TOKENS = [')))
    const names = [...list.matchAll(/'([\w-]+)'/g)].map(match => match[1] ?? '')
    expect(names.length).toBeGreaterThan(30)
    expect(names.filter(name => !css.includes(`--${name}: `))).toEqual([])
  })
  it.each(pairs(TEXT))('$front reads on $ground, $theme: at least 4.5 [WCAG 2.2, 1.4.3]', ({ theme, front, ground }) => {
    expect(contrast(front, ground, theme)).toBeGreaterThanOrEqual(4.5)
  })
  it.each(pairs(DRAWN))('$front is seen on $ground, $theme: at least 3 [WCAG 2.2, 1.4.11]', ({ theme, front, ground }) => {
    expect(contrast(front, ground, theme)).toBeGreaterThanOrEqual(3)
  })
  it('gives 21 for black on white and 1 for a colour on itself [WCAG 2.2, closed form]', () => {
    expect((luminance(linear('#FFFFFF')) + 0.05) / (luminance(linear('#000000')) + 0.05)).toBeCloseTo(21, 6)
    expect(contrast('ink', 'ink', 'light')).toBe(1)
  })
  it.each((['light', 'dark'] as const).flatMap(theme => Object.keys(DEFICIENCY).map(seen => ({ theme, seen }))))('keeps the mechanisms 12 apart, $theme, $seen [OKLab × 100]', ({ theme, seen }) => {
    for (const [one, other] of [['t1', 't2'], ['t1', 'cest'], ['t2', 'cest']] as const) expect(distance(one, other, theme, seen)).toBeGreaterThanOrEqual(12)
  })
})
