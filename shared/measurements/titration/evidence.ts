import { conditionalAtBloodPH } from '../../evidence/records/conditionalValues'
import { draftOf } from '../../evidence/records/common'
import type { EvidenceDraft } from '../../evidence/types'
import type { NamedQuantity } from '../../evidence/quantity'
import { protonShares } from '../../science/equilibria/protonation'
import type { AnalysisInput, AnalysisOutcome } from '../types'
import { evidenceConditions, typedList } from './conditions'
import { combinedSe, isProtonStep } from './constants'
import type { RefinedSystem } from './refined'
import { protonated } from './system'

const Z_95 = 1.959963984540054

/** Constants of an analysis, in the form in which stability records keep them. */
function listsOf(parameters: readonly NamedQuantity[], input: AnalysisInput) {
  const exact = (name: string): number[] => parameters.filter(one => one.name === name && one.kind === '=').map(one => one.value)
  return { steps: parameters.filter(one => isProtonStep(one.name)).map(({ value, se }) => ({ value, se })), complexProtonation: exact('logKMHL'), complexHydroxide: exact('logKMLOH'), metalHydroxide: typedList(input.conditions.metalHydroxide) ?? [] }
}

/** log K with the conditional constant and pM that follow, as a typed stability record says them; nothing where no metal was titrated or log K was held. */
function draftsOf(parameters: readonly NamedQuantity[], input: AnalysisInput): EvidenceDraft[] {
  const logK = parameters.find(one => one.name === 'logK')
  if (!logK || logK.label.endsWith('held')) return []
  const { steps, complexProtonation, complexHydroxide, metalHydroxide } = listsOf(parameters, input)
  const conditions = evidenceConditions(input.conditions)
  const metal = String(input.conditions.metal)
  const stored = { value: logK.value, kind: logK.kind, se: logK.se }
  const detail = { metal, protonation: steps.map(step => step.value), complexProtonation, complexHydroxide, metalHydroxide, enthalpy_kJ_per_mol: null, enthalpy_se_kJ_per_mol: null }
  const own = draftOf({ quantity: 'logK', stored, conditions, detail })
  return [{ ...own, value: { ...own.value, interval: logK.interval } }, ...conditionalAtBloodPH({ logK: stored, own: steps, registered: null, complexProtonation, complexHydroxide, metalHydroxide, conditions }, metal)]
}

/** Conditional log K and pM at pH 7.4 with errors from all covariances of the refinement. */
export function conditionalQuantities(constants: readonly NamedQuantity[], { fit }: RefinedSystem, input: AnalysisInput): NamedQuantity[] {
  return draftsOf(constants, input).filter(draft => draft.quantity !== 'logK').map(({ quantity, value, conditions }) => {
    const se = value.kind !== '=' || constants.some(one => isProtonStep(one.name) && one.se === null) ? null : combinedSe(fit, conditionalGradient(constants, input, Number(conditions.pH)))
    return { name: quantity, label: quantity === 'pM' ? 'pM at pH 7.4' : 'Conditional log K at pH 7.4', unit: '', value: value.value, kind: value.kind, se, interval: se === null ? null : [value.value - Z_95 * se, value.value + Z_95 * se] as [number, number], evidenceId: null }
  })
}

/** d log K_cond / d log β of every refined species: shares of the complex for those with metal, minus shares of the unbound ligand for those without. */
function conditionalGradient(constants: readonly NamedQuantity[], input: AnalysisInput, pcH: number): ReadonlyMap<string, number> {
  const { steps, complexProtonation, complexHydroxide } = listsOf(constants, input)
  const ligand = protonShares(steps.map(step => step.value), pcH)
  const forms = [['ML', 0], ...complexProtonation.map(K => ['MHL', K - pcH] as const), ...complexHydroxide.map(K => ['MLOH', K + pcH] as const)] as const
  const total = forms.reduce((sum, [, log]) => sum + 10 ** log, 0)
  return new Map<string, number>([...forms.map(([name, log]) => [name, 10 ** log / total] as const), ...ligand.slice(1).map((share, j) => [protonated(j + 1), -share] as const)])
}

/** Evidence of a titration: the numbers of the stored parameters, so that what is signed is what was shown. */
export function titrationEvidence({ series }: Extract<AnalysisOutcome, { ok: true }>, input: AnalysisInput): EvidenceDraft[] {
  return draftsOf(series.parameters, input).map((draft) => {
    const shown = series.parameters.find(one => one.name === draft.quantity)
    return shown ? { ...draft, value: { ...draft.value, se: shown.se, interval: shown.interval } } : draft
  })
}
