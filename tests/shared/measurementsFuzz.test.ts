import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { UploadDraft } from '#shared/measurements/draft'
import { relaxFitted } from '#shared/measurements/relaxFitted'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { readText } from '#shared/measurements/tabular/readText'
import { understandTable } from '#shared/measurements/tabular/understand'
import type { MeasurementKind } from '#shared/measurements/types'

/** More runs where time is given. */
const runs = process.env.LANTHORN_TEST === 'full' ? 600 : 150
const TIMEOUT = 60_000

const kinds: MeasurementKind[] = [relaxT1Ir, relaxFitted]
const cell = fc.oneof(
  fc.constantFrom('', 'TI (ms)', 'TI', 'conc (mM)', 'tube', 'agent', 'signal', 'T1 (ms)', 'R1', 'SE', 'blank', '0.5 mM', 'NaN', '-5', '1,5', '1 234.5', '"', '#', 'ms', '50 ms', '1e999', '<0.1', ':', '=', 'Field: 3 T'),
  fc.double({ min: -1e4, max: 1e4, noNaN: true }).map(String), fc.string({ maxLength: 6 }),
)
const table = fc.tuple(fc.array(fc.array(cell, { maxLength: 7 }), { maxLength: 12 }), fc.constantFrom(',', ';', '\t')).map(([rows, mark]) => rows.map(row => row.join(mark)).join('\n'))

describe('whatever is uploaded, an answer comes back [property, seed 20261201]', () => {
  it('for any bytes', () => {
    fc.assert(fc.property(fc.uint8Array({ maxLength: 400 }), (bytes) => {
      const read = readText(bytes)
      if (!read.ok) expect(read.problem.accepted).not.toBe('')
      else for (const kind of kinds) expect(understandTable({ text: read.text, kind }).problems.length).toBeGreaterThan(0)
    }), { seed: 20261201, numRuns: runs })
  }, TIMEOUT)

  it('for any table, and every problem has words and a place inside the file', () => {
    fc.assert(fc.property(table, fc.boolean(), fc.constantFrom(undefined, 'long' as const, 'columnPerTube' as const, 'rowPerTube' as const), (text, isFitted, layout) => {
      const understood = understandTable({ text, kind: isFitted ? relaxFitted : relaxT1Ir, draft: { ...(layout ? { layout } : {}) } })
      const rows = text.split('\n').length
      for (const problem of understood.problems) {
        expect(problem.message.length).toBeGreaterThan(5)
        expect(problem.accepted.length).toBeGreaterThan(3)
        expect(problem.row ?? 1).toBeGreaterThanOrEqual(1)
        expect(problem.row ?? 1).toBeLessThanOrEqual(rows)
        expect(problem.column ?? 1).toBeGreaterThanOrEqual(1)
      }
      for (const tube of understood.tubes) {
        expect(tube.points.rows.every(row => row.length === tube.points.columns.length && row.every(value => value === null || Number.isFinite(value)))).toBe(true)
        expect(tube.pointPlaces).toHaveLength(tube.points.rows.length)
      }
    }), { seed: 20261201, numRuns: runs })
  }, TIMEOUT)

  it('twice the same for the same text [determinism]', () => {
    fc.assert(fc.property(table, (text) => {
      expect(understandTable({ text, kind: relaxT1Ir })).toEqual(understandTable({ text, kind: relaxT1Ir }))
    }), { seed: 7, numRuns: 40 })
  }, TIMEOUT)
})

describe('the draft', () => {
  it('accepts nothing that it does not know', () => {
    expect(UploadDraft.safeParse({}).success).toBe(true)
    expect(UploadDraft.safeParse({ delimiter: '|' }).success).toBe(false)
    expect(UploadDraft.safeParse({ tubes: [{ key: 'column 1', conc_mM: Number.NaN }] }).success).toBe(false)
    expect(UploadDraft.safeParse({ surprise: 1 }).success).toBe(false)
  })
})

describe('size', () => {
  it('reads 40,000 rows in the long form into their 400 tubes', () => {
    const rows = Array.from({ length: 40_000 }, (_, i) => `t${Math.floor(i / 100)},SK-07,B1,${Math.floor(i / 100) / 100},${(i % 100) * 10},${i % 997}.5`)
    const { tubes } = understandTable({ text: `tube,agent,batch,conc (mM),TI (ms),signal\n${rows.join('\n')}\n`, kind: relaxT1Ir })
    expect(tubes).toHaveLength(400)
  }, TIMEOUT)
})
