import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { readText } from '#shared/measurements/tabular/readText'
import { understandTable } from '#shared/measurements/tabular/understand'

interface Phantom { ti_ms: number[], tubes: { conc_mM: number, signals: number[] }[] }
interface Style { delimiter: string, decimal: string, mark: boolean, lineEnd: string, metadata: boolean, unit: 'ms' | 's', head: number }

const phantom: fc.Arbitrary<Phantom> = fc.record({
  ti_ms: fc.uniqueArray(fc.integer({ min: 5, max: 9000 }), { minLength: 4, maxLength: 9 }),
  concs: fc.uniqueArray(fc.integer({ min: 0, max: 400 }), { minLength: 3, maxLength: 6 }),
  values: fc.array(fc.integer({ min: -99999, max: 99999 }), { minLength: 54, maxLength: 54 }),
}).map(({ ti_ms, concs, values }) => ({
  ti_ms, tubes: concs.map((conc, j) => ({ conc_mM: conc / 100, signals: ti_ms.map((_, i) => (values[j * 9 + i] ?? 0) / 100) })),
}))
const style: fc.Arbitrary<Style> = fc.record({
  pair: fc.constantFrom([',', '.'], [';', '.'], [';', ','], ['\t', '.'], ['\t', ',']), mark: fc.boolean(), lineEnd: fc.constantFrom('\n', '\r\n'),
  metadata: fc.boolean(), unit: fc.constantFrom('ms' as const, 's' as const), head: fc.nat(3),
}).map(({ pair, ...rest }) => ({ delimiter: pair[0], decimal: pair[1], ...rest }))

function written({ decimal, unit, head }: Style) {
  const number = (value: number, digits = 2) => value.toFixed(digits).replace('.', decimal)
  const time = (ti_ms: number) => unit === 'ms' ? String(ti_ms) : number(ti_ms / 1000, 3)
  const heads = (name: string, u: string) => [`${name} (${u})`, `${name} [${u}]`, `${name}_${u}`, `${name} / ${u}`][head] ?? name
  return { number, time, heads }
}

const WRITERS: Record<string, (phantom: Phantom, style: Style) => string[][]> = {
  long: ({ ti_ms, tubes }, style) => {
    const { number, time, heads } = written(style)
    const rows = tubes.flatMap(({ conc_mM, signals }, j) => ti_ms.map((ti, i) => [`n${j}`, number(conc_mM), time(ti), number(signals[i] ?? 0)]))
    return [['tube', heads('conc', 'mM'), heads('TI', style.unit), 'signal'], ...rows]
  },
  columnPerTube: ({ ti_ms, tubes }, style) => {
    const { number, time, heads } = written(style)
    return [[heads('TI', style.unit), ...tubes.map(tube => `${number(tube.conc_mM)} mM`)], ...ti_ms.map((ti, i) => [time(ti), ...tubes.map(tube => number(tube.signals[i] ?? 0))])]
  },
  columnPerTubeWithRow: ({ ti_ms, tubes }, style) => {
    const { number, time, heads } = written(style)
    return [[heads('TI', style.unit), ...tubes.map((_, j) => `n${j}`)], [heads('conc', 'mM'), ...tubes.map(tube => number(tube.conc_mM))],
      ...ti_ms.map((ti, i) => [time(ti), ...tubes.map(tube => number(tube.signals[i] ?? 0))])]
  },
  rowPerTube: ({ ti_ms, tubes }, style) => {
    const { number, time, heads } = written(style)
    return [['tube', heads('conc', 'mM'), ...ti_ms.map(ti => `${time(ti)} ${style.unit}`)], ...tubes.map((tube, j) => [`n${j}`, number(tube.conc_mM), ...tube.signals.map(signal => number(signal))])]
  },
}

function fileOf(rows: string[][], { delimiter, mark, lineEnd, metadata, decimal }: Style): Uint8Array {
  const lines = metadata ? ['Field: 3 T', `# temperature = 37${decimal}0 °C`, `pH${delimiter}7${decimal}4`, ''] : []
  const text = [...lines, ...rows.map(row => row.join(delimiter)), ''].join(lineEnd)
  return new TextEncoder().encode(mark ? `\uFEFF${text}` : text)
}

/** More runs where time is given. */
const runs = process.env.LANTHORN_TEST === 'full' ? 300 : 60
const TIMEOUT = 60_000

describe('every layout, mark, decimal mark, byte-order mark and line end gives the same tubes', () => {
  it.each(Object.keys(WRITERS))('%s [property, seed 20261130]', (layout) => {
    fc.assert(fc.property(phantom, style, (given, how) => {
      const read = readText(fileOf(WRITERS[layout]?.(given, how) ?? [], how))
      const understood = understandTable({ text: read.ok ? read.text : '', kind: relaxT1Ir, draft: { decimal: how.decimal === ',' ? 'comma' : 'point' } })
      expect(understood.tubes.map(tube => ({ conc_mM: tube.conc_mM, rows: tube.points.rows }))).toEqual(given.tubes.map(tube => ({
        conc_mM: tube.conc_mM, rows: given.ti_ms.map((ti, i) => [ti / 1000, Number((tube.signals[i] ?? 0).toFixed(2))]),
      })))
      if (how.metadata) expect(understood.conditions).toMatchObject({ b0_T: 3, temperature_K: 310.15, pH: 7.4 })
    }), { seed: 20261130, numRuns: runs })
  }, TIMEOUT)

  it('finds the mark and the decimal mark by itself wherever a decimal stands in the file [property, seed 20261130]', () => {
    fc.assert(fc.property(phantom, style, fc.constantFrom(...Object.keys(WRITERS)), (given, how, layout) => {
      const read = readText(fileOf(WRITERS[layout]?.(given, how) ?? [], how))
      const understood = understandTable({ text: read.ok ? read.text : '', kind: relaxT1Ir })
      expect(understood.delimiter).toBe(how.delimiter)
      expect(understood.decimal).toBe(how.decimal === ',' ? 'comma' : 'point')
      expect(understood.layout).toBe(layout.replace('WithRow', ''))
    }), { seed: 20261130, numRuns: runs })
  }, TIMEOUT)
})
