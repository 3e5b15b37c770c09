import { describe, expect, it } from 'vitest'
import { followPath, NO_SOLIDS } from '#shared/science/equilibria/continuation'
import { solveSystem } from '#shared/science/equilibria/solve'
import { compileSystem, type Component, type Species } from '#shared/science/equilibria/system'
import { ladder } from '../../bench/equilibria'

const points = (low: number, high: number, count: number) => Array.from({ length: count }, (_, i) => low + (high - low) * i / (count - 1))
const median = (values: readonly number[]) => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)]!

describe('speciation along a path', () => {
  it('takes a median of at most 6 Newton steps a point with 8 components, 40 species and 200 pH, at a balance of 1e-12', () => {
    const { components, species } = ladder()
    expect([components.length + 1, species.length]).toEqual([8, 40])
    const path = followPath({ components, species }, { kind: 'pcH', values: points(2, 12, 200) })
    if (!path.ok) throw new Error(path.message)
    expect(median(path.steps)).toBeLessThanOrEqual(6)
    // the first point has no neighbour: it alone may take the steps of a cold start
    expect(Math.max(...path.steps.slice(1))).toBeLessThanOrEqual(12)
    expect(path.balanceError).toBeLessThanOrEqual(1e-12)
  })

  it('gives at every pH what a cold start gives there [the same balances solved alone]', () => {
    const { components, species } = ladder()
    const values = points(2, 12, 41)
    const path = followPath({ components, species }, { kind: 'pcH', values })
    if (!path.ok) throw new Error(path.message)
    values.forEach((pcH, i) => {
      const compiled = compileSystem({ components: [...components, { name: 'H', logFree: -pcH }], species })
      const alone = compiled.ok ? solveSystem(compiled) : compiled
      if (!alone.ok) throw new Error(alone.message)
      for (const [name, value] of Object.entries(alone.species_M)) {
        if (value > 1e-300) expect(Math.abs(path.species_M[name]![i]! / value - 1), `${name} at pH ${pcH}`).toBeLessThan(1e-9)
      }
    })
  })

  it('follows a total over twelve decades to the closed form of a 1:1 complex [quadratic]', () => {
    const values = points(-12, 0, 61).map(x => 10 ** x)
    const path = followPath({ components: [{ name: 'L', total_M: 1e-4 }], species: [{ name: 'ML', stoichiometry: { M: 1, L: 1 }, logBeta: 8 }] }, { kind: 'total', component: 'M', values })
    if (!path.ok) throw new Error(path.message)
    values.forEach((metal, i) => {
      const b = 1e8 * (1e-4 - metal) + 1
      const root = Math.sqrt(b * b + 4e8 * metal)
      const free = b >= 0 ? 2 * metal / (b + root) : (root - b) / 2e8
      expect(path.species_M.M![i]! / free).toBeCloseTo(1, 9)
    })
  })

  it('keeps an absent component at exactly zero along the path', () => {
    const path = followPath({ components: [{ name: 'M', total_M: 0 }, { name: 'L', total_M: 1e-3 }], species: [{ name: 'ML', stoichiometry: { M: 1, L: 1 }, logBeta: 8 }] }, { kind: 'pcH', values: [4, 5] })
    expect(path).toMatchObject({ ok: true, species_M: { M: [0, 0], ML: [0, 0] } })
  })

  it.each<[string, Component[], Species[], number[], string]>([
    ['a pH of 14.5', [{ name: 'L', total_M: 1 }], [], [7, 14.5], 'badPath'],
    ['a pH that is no number', [{ name: 'L', total_M: 1 }], [], [NaN], 'badPath'],
    ['no pH at all', [{ name: 'L', total_M: 1 }], [], [], 'badPath'],
    ['a negative total', [{ name: 'L', total_M: -1 }], [], [7], 'badSystem'],
    ['a species of an unknown component', [{ name: 'L', total_M: 1 }], [{ name: 'ML', stoichiometry: { M: 1, L: 1 }, logBeta: 3 }], [7], 'badSystem'],
  ])('refuses %s and says what would be accepted', (_, components, species, values, reason) => {
    const path = followPath({ components, species }, { kind: 'pcH', values })
    expect(path).toMatchObject({ ok: false, reason })
    if (!path.ok) expect(path.accepted.length).toBeGreaterThan(10)
  })

  it('says that no solid is modelled', () => {
    expect(NO_SOLIDS).toContain('not modelled')
  })
})
