import { formatCelsius, formatNumber, NBSP } from '../format'
import type { EvidenceItemDto } from './item'
import { solutionWords } from './records/common'

const METAL_TOTALS = ['metal_M', 'ligand_M'] as const

/** The conditions of a piece of evidence in one line as the trade writes them: "3 T, 37 °C, pH 7.4, plasma". Notation. */
export function conditionWords({ conditions, detail, quantity }: Pick<EvidenceItemDto, 'conditions' | 'detail' | 'quantity'>): string {
  const number = (key: string): number | null => typeof conditions[key] === 'number' ? conditions[key] : null
  const written = (key: string, before: string, unit: string): string => number(key) === null ? '' : `${before}${formatNumber(number(key))}${unit ? `${NBSP}${unit}` : ''}`
  const totals = METAL_TOTALS.every(key => number(key) !== null) ? `${formatNumber(number('metal_M')! * 1e6)}${NBSP}µM metal, ${formatNumber(number('ligand_M')! * 1e6)}${NBSP}µM ligand` : ''
  const range = number('pHMin') !== null && number('pHMax') !== null ? `pH${NBSP}${formatNumber(number('pHMin'))} to ${formatNumber(number('pHMax'))}` : ''
  const acid = conditions.acid === 'notStated' ? 'strong acid, not stated which' : number('acid_M') === null ? '' : `${formatNumber(number('acid_M'))}${NBSP}M ${typeof conditions.acid === 'string' && conditions.acid !== 'other' ? conditions.acid.replace(/(\d)/, '_$1') : 'acid'}`
  const method = quantity === 'freeMetal_frac' && typeof detail.method === 'string' ? detail.method : ''
  return [
    written('b0_T', '', 'T'), number('temperature_K') === null ? '' : formatCelsius(number('temperature_K'), 0), written('pH', `pH${NBSP}`, ''), range, acid,
    solutionWords(conditions.ionicStrength_M, conditions.medium), totals, method,
  ].filter(Boolean).join(', ')
}
