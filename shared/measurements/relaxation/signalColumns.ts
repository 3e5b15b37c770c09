import type { ColumnSpec, ConditionSpec } from '../types'

export const SIGNAL_COLUMN: ColumnSpec = {
  stem: 'signal', field: 'signal_au', label: 'Signal', dimension: 'signal', role: 'y', required: true, help: 'Mean signal of the tube, signed or magnitude',
  synonyms: ['signal', 's', 'intensity', 'signal intensity', 'si', 'mean', 'mean signal', 'mean intensity', 'magnitude', 'amplitude', 'mz', 'value', 'region mean', 'roi mean'],
}

export const SIGNAL_SD_COLUMN: ColumnSpec = {
  stem: 'signalSd', field: 'signalSd_au', label: 'Signal, SD', dimension: 'signal', role: 'sigma', required: false, above: 0, follows: 'signal', help: 'Standard deviation of one mean, not of the pixels',
  synonyms: ['sd', 'signal sd', 'sd signal', 'signal se', 'signal error', 'std', 'stdev', 'standard deviation', 'sigma', 'noise', 'error', 'se'],
}

/** Numbers of the region that a mean was taken over. */
export const REGION_COLUMNS: readonly ColumnSpec[] = [
  {
    stem: 'regionSd', field: 'regionSd_au', label: 'Region, SD of its pixels', dimension: 'signal', role: 'aux', required: false, above: 0,
    help: 'Spread of the pixels of the region; over the root of their number it is the standard deviation of the mean. Interpolated pixels are not independent: give the number acquired',
    synonyms: ['region sd', 'roi sd', 'sd of region', 'sd roi', 'sd region', 'pixel sd', 'sd of pixels', 'region std', 'roi std', 'pixel std', 'region standard deviation', 'roi standard deviation'],
  },
  {
    stem: 'pixels', field: 'pixels', label: 'Region, pixels', dimension: 'none', role: 'aux', required: false, above: 0, help: 'Number of acquired pixels in the region',
    synonyms: ['pixels', 'n pixels', 'number of pixels', 'pixel count', 'voxels', 'n voxels', 'number of voxels', 'region pixels', 'roi pixels', 'region size', 'roi size', 'npix'],
  },
]

export const NOISE_CONDITIONS: readonly ConditionSpec[] = [
  { key: 'noiseSigma_au', label: 'Noise, SD of one mean', type: 'number', dimension: 'signal', shownUnit: 'au', required: false, min: 1e-300, help: 'If it was measured: used as the standard deviation of every point', synonyms: ['noise', 'noise sd', 'sigma'] },
  {
    key: 'noiseBackgroundSd_au', label: 'Background, SD of its pixels', type: 'number', dimension: 'signal', shownUnit: 'au', required: false, min: 1e-300,
    help: 'SD of magnitudes in air; divided by 0.655 it is the noise of one pixel, which sets the floor', synonyms: ['background sd', 'sd background', 'background noise', 'background standard deviation', 'air sd'],
  },
  { key: 'preparationNote', label: 'Preparation', type: 'text', required: false, help: 'How the tubes were made', synonyms: ['preparation', 'sample preparation'] },
]

export const SIGNAL_FORM: ConditionSpec = {
  key: 'signalForm', label: 'Form of the signal', type: 'choice', required: true, help: 'Magnitude data get their sign back in the fit', synonyms: ['signal form', 'signal is', 'signal type', 'data', 'reconstruction'],
  choices: [{ value: 'magnitude', label: 'magnitude', synonyms: ['modulus', 'absolute'] }, { value: 'signed', label: 'signed (phase-corrected)', synonyms: ['signed', 'real', 'phase corrected', 'phase sensitive'] }],
}

export const SEQUENCE: ConditionSpec = {
  key: 'sequence', label: 'Sequence', type: 'text', required: false, help: 'Name and read-out of the pulse sequence', synonyms: ['sequence', 'pulse sequence', 'protocol'],
}
