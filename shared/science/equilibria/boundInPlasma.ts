/**
 * The fraction of an agent's metal that is still bound when the plasma model has come to equilibrium: what thermodynamics
 * alone would do, however long it takes.
 */
import { PLASMA_ASSUMPTIONS, PLASMA_COMPETITORS, PLASMA_SPECIES, type PlasmaCompetitor, type PlasmaTotals } from './media'
import { logAlphaProton, overallFromStepwise } from './protonation'
import { solveSystem } from './solve'
import { compileSystem, type CompiledSystem, type Component, type Species } from './system'

export interface AgentConstants {
  /** log K of the lanthanide complex ML, M⁻¹. */
  readonly logK: number
  /** Stepwise log protonation constants of the ligand, most basic first. */
  readonly ligandProtonation: readonly number[]
  /** log K of ML for competing metals, where known. */
  readonly logKCompetitors: Readonly<Partial<Record<PlasmaCompetitor, number>>>
}

export interface PlasmaConditions {
  readonly totals: PlasmaTotals
  readonly pcH: number
  /** Concentration of the agent in plasma. */
  readonly agent_mM: number
}

export interface BoundInPlasma {
  readonly ok: true
  readonly bound_frac: number
  /** '<' where a competitor's constant is unknown: with it, less could stay bound. */
  readonly kind: '=' | '<'
  readonly leftOut: readonly PlasmaCompetitor[]
  /** Share of the ligand held by each competing metal, and free or protonated ('free'). */
  readonly ligandShare: Readonly<Record<string, number>>
  /** −log10 of the free lanthanide ion. */
  readonly pMetal: number
  /** log10 of how far lanthanide phosphate would be oversaturated; above 0 the model, which forms no solid, flatters the agent. */
  readonly phosphateOversaturation_decades: number
  readonly assumptions: readonly string[]
}

export interface BoundRefused {
  readonly ok: false
  readonly reason: 'notConverged' | 'badInput'
  readonly message: string
}

/** The plasma model without an agent: free concentrations, from which the solution with any agent is a few steps away. */
export interface PlasmaBackground {
  readonly ok: true
  readonly free_M: Readonly<Record<string, number>>
}

function backgroundComponents({ totals, pcH }: PlasmaConditions): Component[] {
  const milli = (name: string, amount_mM: number): Component => ({ name, total_M: amount_mM / 1e3 })
  return [
    { name: 'H', logFree: -pcH },
    milli('Ca', totals.ca_mM), milli('Mg', totals.mg_mM), milli('Zn', totals.zn_uM / 1e3), milli('Cu', totals.cu_uM / 1e3),
    milli('PO4', totals.phosphate_mM), milli('CO3', totals.carbonate_mM), milli('Cit', totals.citrate_mM),
    milli('Lac', totals.lactate_mM), milli('His', totals.histidine_mM), milli('Alb', totals.albumin_mM),
  ]
}

/** OH⁻ (H⁻¹ alone) needs no balance where pH is held. */
const BACKGROUND_SPECIES = PLASMA_SPECIES.filter(species => species.name !== 'OH')

/** Solves the plasma model without an agent; the same for all agents under one profile. */
export function plasmaBackground(conditions: PlasmaConditions): PlasmaBackground | BoundRefused {
  const compiled = compileSystem({ components: [{ name: 'Ln', total_M: 0 }, ...backgroundComponents(conditions)], species: BACKGROUND_SPECIES })
  if (!compiled.ok) return { ok: false, reason: 'badInput', message: compiled.message }
  const answer = solveSystem(compiled)
  return answer.ok ? { ok: true, free_M: answer.free_M } : { ok: false, reason: 'notConverged', message: answer.message }
}

/** ln(free) as if a thousandth of the agent had let go and the background had not noticed. */
function startFrom(background: PlasmaBackground, system: CompiledSystem, agent: AgentConstants, conditions: PlasmaConditions): Float64Array {
  const agent_M = conditions.agent_mM / 1e3
  let alpha = 10 ** logAlphaProton(agent.ligandProtonation, conditions.pcH)
  for (const metal of PLASMA_COMPETITORS) alpha += 10 ** (agent.logKCompetitors[metal] ?? -Infinity) * (background.free_M[metal] ?? 0)
  const lnLigand = Math.log(1e-3 * agent_M / alpha)
  return Float64Array.from(system.unknowns, (name) => {
    if (name === 'L') return lnLigand
    if (name === 'Ln') return Math.log(0.999 * agent_M) - agent.logK * Math.LN10 - lnLigand
    return Math.log(background.free_M[name]!)
  })
}

function agentSpecies(agent: AgentConstants): Species[] {
  return [
    { name: 'LnL', stoichiometry: { Ln: 1, L: 1 }, logBeta: agent.logK },
    ...overallFromStepwise(agent.ligandProtonation).map((logBeta, j) => ({ name: `H${j + 1}L`, stoichiometry: { L: 1, H: j + 1 }, logBeta })),
    ...PLASMA_COMPETITORS.flatMap((metal) => {
      const logBeta = agent.logKCompetitors[metal]
      return logBeta === undefined ? [] : [{ name: `${metal}L`, stoichiometry: { [metal]: 1, L: 1 }, logBeta }]
    }),
  ]
}

/**
 * log10 K of Ln³⁺ + HPO₄²⁻ = LnPO₄·10H₂O(s) + H⁺ for gadolinium, 25 °C.
 * @source an aqueous thermodynamic database in public use lists −11.978 for the reverse reaction (looked up)
 */
const LOG_K_PHOSPHATE_SOLID = 11.978

/**
 * Solves the plasma model with one agent in it. `background` may be passed in where many agents share one set of conditions; the
 * answer is the same.
 */
export function boundInPlasma(agent: AgentConstants, conditions: PlasmaConditions, background = plasmaBackground(conditions)): BoundInPlasma | BoundRefused {
  if (!(conditions.agent_mM > 0)) return { ok: false, reason: 'badInput', message: 'the concentration of the agent in plasma must be above zero' }
  if (!background.ok) return background
  const agent_M = conditions.agent_mM / 1e3
  const compiled = compileSystem({
    components: [{ name: 'Ln', total_M: agent_M }, { name: 'L', total_M: agent_M }, ...backgroundComponents(conditions)],
    species: [...BACKGROUND_SPECIES, ...agentSpecies(agent)],
  })
  if (!compiled.ok) return { ok: false, reason: 'badInput', message: compiled.message }
  const answer = solveSystem(compiled, startFrom(background, compiled, agent, conditions))
  if (!answer.ok) return { ok: false, reason: 'notConverged', message: answer.message }
  const held = (name: string): number => (answer.species_M[name] ?? 0) / agent_M
  const leftOut = PLASMA_COMPETITORS.filter(metal => agent.logKCompetitors[metal] === undefined)
  const ligandShare: Record<string, number> = { Ln: held('LnL'), free: held('L') + agent.ligandProtonation.reduce((sum, _, j) => sum + held(`H${j + 1}L`), 0) }
  for (const metal of PLASMA_COMPETITORS) if (!leftOut.includes(metal)) ligandShare[metal] = held(`${metal}L`)
  return {
    ok: true, bound_frac: held('LnL'), kind: leftOut.length ? '<' : '=', leftOut, ligandShare,
    pMetal: -Math.log10(answer.free_M.Ln!),
    phosphateOversaturation_decades: LOG_K_PHOSPHATE_SOLID + Math.log10(answer.free_M.Ln!) + Math.log10(answer.species_M.HPO4 ?? 0) + conditions.pcH,
    assumptions: PLASMA_ASSUMPTIONS,
  }
}
