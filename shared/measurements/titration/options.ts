import { optionOf } from '../fitOptions'
import type { AnalysisInput, FitOptionSpec } from '../types'

const HOW = [{ value: 'refine', label: 'refined' }, { value: 'hold', label: 'held at the value typed' }] as const

/** Which species are in the system. */
export const TITRATION_MODELS = [
  { id: 'titrationML', version: 1, title: 'ML', within: ['titrationMHL', 'titrationMLOH', 'titrationMHLMLOH'] },
  { id: 'titrationMHL', version: 1, title: 'ML and its protonated form MHL', within: ['titrationMHLMLOH'] },
  { id: 'titrationMLOH', version: 1, title: 'ML and its hydroxo form ML(OH)', within: ['titrationMHLMLOH'] },
  { id: 'titrationMHLMLOH', version: 1, title: 'ML, MHL and ML(OH)' },
] as const
export const hasProtonated = (modelId: string): boolean => modelId.includes('MHL')
export const hasHydroxo = (modelId: string): boolean => modelId.includes('MLOH')

const how = (key: string, label: string, models?: readonly string[]): FitOptionSpec =>
  ({ key, label, type: 'choice', choices: HOW, standard: 'refine', help: 'Held values are taken as exact', ...(models ? { models } : {}) })

const SPECS = {
  protonation: {
    key: 'protonation', label: 'Protonation constants', type: 'choice', standard: 'auto', help: 'Typed values are where a refinement starts',
    choices: [{ value: 'auto', label: 'refined where a curve holds the ligand alone, else held' }, ...HOW],
  },
  logKML: how('logKML', 'log K of ML'),
  logKMHL: how('logKMHL', 'log K of ML + H', ['titrationMHL', 'titrationMHLMLOH']),
  logKMLOH: how('logKMLOH', 'log K of ML = ML(OH) + H', ['titrationMLOH', 'titrationMHLMLOH']),
  acid: { key: 'acid', label: 'Acid in the vessel', type: 'choice', standard: 'stated', help: 'An amount rarely known to the last 0.2 %', choices: [{ value: 'stated', label: 'as stated' }, { value: 'refine', label: 'refined, one for each curve' }] },
  titre: { key: 'titre', label: 'Titre of the base', type: 'choice', standard: 'calibrated', help: 'A calibration run finds it against its acid', choices: [{ value: 'calibrated', label: 'by the calibration, where there is one' }, { value: 'stated', label: 'as stated' }] },
  sdPH: { key: 'sdPH', label: 'Error of a pH reading', type: 'number', min: 1e-4, max: 0.5, standard: 0.003, help: 'Standard deviation; the weights follow from it (common practice, no source)' },
  sdE: { key: 'sdE', label: 'Error of a reading in mV', type: 'number', min: 0.005, max: 20, unit: 'mV', standard: 0.1, help: 'Standard deviation of one reading (common practice, no source)' },
  sdVolume: { key: 'sdVolume', label: 'Error of a volume', type: 'number', min: 0, max: 500, unit: 'µL', standard: 2, help: 'Standard deviation of the volume in a burette (common practice, no source)' },
} as const satisfies Record<string, FitOptionSpec>

export const TITRATION_OPTIONS: readonly FitOptionSpec[] = Object.values(SPECS)

/** An option of a titration, its standard where it was not chosen. */
export const chosen = (input: Pick<AnalysisInput, 'options'>, key: keyof typeof SPECS): string | number => optionOf(input, SPECS[key])
