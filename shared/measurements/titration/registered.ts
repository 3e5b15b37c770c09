import { mediumDifference } from '../../evidence/records/conditionalValues'
import type { RecordContext } from '../../evidence/records/define'
import { asks, blocks } from '../tabular/problem'
import type { Conditions, UploadProblem } from '../types'
import { evidenceConditions } from './conditions'

/** Metal of the agent and the protonation constants registered with its ligand, which start a refinement or are held. */
export function registeredConstants({ metal, ligandProtonation }: RecordContext, conditions: Conditions): { conditions: Conditions, problems: UploadProblem[] } {
  const protonation = ligandProtonation === null ? null : ligandProtonation.steps.map(step => String(step.value)).join('; ')
  const isUsed = ligandProtonation !== null && (conditions.protonation ?? null) === null
  const difference = isUsed ? mediumDifference(evidenceConditions(conditions), ligandProtonation) : null
  return {
    conditions: { metal, protonation },
    problems: [
      ...(typeof conditions.metal === 'string' && conditions.metal !== metal ? [blocks('otherMetal', `The metal is ${conditions.metal}, and the agent is registered with ${metal}.`, `${metal}, or the agent that holds ${conditions.metal}`, { field: 'conditions.metal' })] : []),
      ...(difference === null ? [] : [asks('otherMedium', difference, 'constants of the same medium typed; or as it is where a curve of the ligand alone refines them', { field: 'conditions.protonation' })]),
    ],
  }
}
