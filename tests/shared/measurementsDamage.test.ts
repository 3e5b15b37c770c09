import { describe, expect, it } from 'vitest'
import { MEASUREMENTS } from '#shared/measurements/index'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { readTable } from '#shared/measurements/tabular/readTable'
import type { Understood } from '#shared/measurements/tabular/understood'
import { BROKEN, mutants } from '../support/brokenUploads'
import { RECOVERY_FORM } from './measurementsSupport'

const draft = { conditions: { ...RECOVERY_FORM }, complexCode: 'SK-07', lot: 'B2' }
const read = (bytes: Uint8Array): Promise<Understood> => readTable(bytes, { kind: relaxT1Ir, draft })

/** What holds of every reading: words for every problem, finite numbers only, and nothing storable beside a problem that blocks. */
function expectSound(understood: Understood): void {
  for (const problem of understood.problems) {
    expect(problem.message.length).toBeGreaterThan(8)
    expect(problem.message.length).toBeLessThan(1200)
    expect(problem.accepted.length).toBeGreaterThan(3)
    expect((problem.row ?? 1) >= 1 && (problem.column ?? 1) >= 1).toBe(true)
  }
  expect(understood.problems.length).toBeLessThanOrEqual(201)
  for (const tube of understood.tubes) expect(tube.points.rows.every(row => row.every(value => value === null || Number.isFinite(value)))).toBe(true)
  expect(understood.canStore).toBe(understood.series.length > 0 && understood.problems.every(problem => problem.severity !== 'blocks'))
  expect(() => JSON.stringify(understood)).not.toThrow()
}

describe('a broken file is refused in words and never brings the reading down', () => {
  it.each(BROKEN)('$name', async ({ bytes, says }) => {
    const understood = await read(bytes)
    expectSound(understood)
    const blocking = understood.problems.filter(problem => problem.severity === 'blocks')
    expect(understood.canStore).toBe(false)
    expect(blocking.length).toBeGreaterThan(0)
    expect(blocking.map(problem => problem.message).join('\n')).toMatch(says)
  }, 30_000)

  it.each([0, 1, 2, 3, 4, 5, 6, 7])('five hundred good files with random damage, part %i [seeded]', async (part) => {
    const damaged = mutants(process.env.LANTHORN_TEST === 'full' ? 4000 : 504)
    let refused = 0
    for (const { name, bytes } of damaged.filter((_, index) => index % 8 === part)) {
      const understood = await read(bytes).catch((error: unknown) => { throw new Error(`${name}: ${error instanceof Error ? error.stack : String(error)}`) })
      expectSound(understood)
      if (!understood.canStore) refused++
    }
    expect(refused).toBeGreaterThan(damaged.length / 8 / 4)
  }, 300_000)

  it.each(Object.values(MEASUREMENTS).map(kind => [kind.kind, kind] as const))('and %s says so as well', async (_, kind) => {
    const files = [...BROKEN.filter((__, index) => index % 7 === 3), ...mutants(504).filter((__, index) => index % 12 === 5)]
    for (const { bytes } of files) expectSound(await readTable(bytes, { kind, draft: {} }))
  }, 60_000)
})
