import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { solvePoint } from '#shared/science/equilibria/kernel'
import { openKernel } from '#shared/science/equilibria/kernelLayout'
import { BALANCE_TOLERANCE, solveSystem } from '#shared/science/equilibria/solve'
import { compileSystem, type CompiledSystem } from '#shared/science/equilibria/system'

interface Case { totals_M: number[], powers: number[][], logBeta: number[], lnFree: number[], scipyAgrees: boolean }
const { cases } = JSON.parse(readFileSync(new URL('../../fixtures/reference/equilibria/systems.json', import.meta.url), 'utf8')) as { cases: Case[] }

function compiled({ totals_M, powers, logBeta }: Case): CompiledSystem {
  const system = compileSystem({
    components: totals_M.map((total_M, k) => ({ name: `C${k}`, total_M })),
    species: powers.map((row, j) => ({ name: `S${j}`, logBeta: logBeta[j]!, stoichiometry: Object.fromEntries(row.flatMap((p, k) => p === 0 ? [] : [[`C${k}`, p]])) })),
  })
  if (!system.ok) throw new Error(system.message)
  return system
}
/** Largest relative error of a free concentration. */
const worst = (found: ArrayLike<number>, exact: readonly number[]) => exact.reduce((top, u, k) => Math.max(top, Math.abs(Math.expm1(found[k]! - u))), 0)

describe('200 random systems', () => {
  it('reach 8 components, 40 species, totals from 1e-12 to 1 M and proton balances of both signs', () => {
    expect(cases.length).toBe(200)
    expect(Math.max(...cases.map(one => one.totals_M.length))).toBe(8)
    expect(Math.max(...cases.map(one => one.logBeta.length))).toBe(40)
    expect(Math.min(...cases.flatMap(one => one.totals_M.map(Math.abs)))).toBeLessThan(2e-12)
    expect(cases.some(one => one.totals_M[0]! < 0)).toBe(true)
    expect(cases.filter(one => one.scipyAgrees).length).toBeGreaterThan(120)
  })

  it('are solved to a balance of 1e-12 and free concentrations of 1e-8 from a cold start [mpmath at 50 digits]', () => {
    for (const [index, one] of cases.entries()) {
      const answer = solveSystem(compiled(one))
      if (!answer.ok) throw new Error(`system ${index}: ${answer.message}`)
      expect(answer.balanceError, `system ${index}`).toBeLessThanOrEqual(BALANCE_TOLERANCE)
      expect(worst(answer.lnFree, one.lnFree), `system ${index}`).toBeLessThan(1e-8)
    }
  })

  it('are solved as well by the repeated solver, from a start two units off in ln(free) [mpmath at 50 digits]', () => {
    for (const [index, one] of cases.entries()) {
      const kernel = openKernel(compiled(one))
      one.lnFree.forEach((u, k) => { kernel.u[k] = u + (k % 2 ? 2 : -2) })
      expect(solvePoint(kernel), `system ${index}`).toBeNull()
      expect(kernel.balanceError, `system ${index}`).toBeLessThanOrEqual(BALANCE_TOLERANCE)
      expect(worst(kernel.u, one.lnFree), `system ${index}`).toBeLessThan(1e-8)
    }
  })
})
