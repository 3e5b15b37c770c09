import type { AnalysisInput } from '../types'
import { solutionText } from '../kinetics/methodText'
import type { Told } from './analyse'
import { chosen, TITRATION_MODELS } from './options'

/** How the constants were found, for a methods section. */
export function methodText(input: AnalysisInput, { counted, calibrations, done, pKw }: Told): string {
  const { conditions, modelId } = input
  const points = counted.reduce((sum, one) => sum + one.used.length, 0)
  const batch = counted.filter(one => one.plan.isBatch).length
  const where = `${(Number(conditions.temperature_K) - 273.15).toFixed(1)} °C${solutionText(conditions)}`
  const electrodes = calibrations.filter(one => one.found !== null).length
  const complex = counted.some(one => one.plan.role === 'complex')
  const refined = done.fit.constants.map(one => one.name.replace('MLOH', 'ML(OH)')).join(', ')
  return `Titrations with strong base at ${where}: ${counted.length} ${counted.length === 1 ? 'curve' : 'curves'} (${points} points${batch > 0 ? `; ${batch} of them a batch series of separate flasks` : ''}). `
    + (electrodes > 0 ? `The electrode was calibrated as −log[H] by ${electrodes} ${electrodes === 1 ? 'titration' : 'titrations'} of strong acid (end points after Gran 1952). ` : '')
    + `${complex ? `Species of the complex: ${TITRATION_MODELS.find(one => one.id === modelId)?.title ?? modelId}. ` : ''}Overall constants of ${refined} were refined over all curves together by least squares on pH, weighted with ${chosen(input, 'sdE')} mV or ${chosen(input, 'sdPH')} pH for a reading and `
    + `${chosen(input, 'sdVolume')} µL for a volume; pKw ${Number(pKw.toPrecision(4))}. Standard errors are widened where chi-square exceeds its degrees of freedom${electrodes > 0 && counted.some(one => one.plan.readings === 'mV') ? ' and hold the errors of the calibration' : ''}.`
}
