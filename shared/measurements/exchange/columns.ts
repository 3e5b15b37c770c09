import { SIGNAL_COLUMN, SIGNAL_SD_COLUMN } from '../relaxation/signalColumns'
import { TUBE_COLUMNS } from '../relaxation/columns'
import type { ColumnSpec } from '../types'

const OFFSET_WORDS = ['offset', 'rf offset', 'saturation offset', 'frequency offset', 'offset frequency', 'saturation frequency', 'irradiation offset', 'irradiation frequency', 'delta', 'dw', 'Δω', 'δ', 'chemical shift', 'shift']

const aux = (stem: string, field: string, label: string, rest: Pick<ColumnSpec, 'dimension' | 'synonyms' | 'help'> & Partial<ColumnSpec>): ColumnSpec => ({ stem, field, label, role: 'aux', required: false, ...rest })

/** Points of a Z-spectrum: offset, signal, and with what they were saturated. A reading at B1 of 0, or beyond the far offset, is S0. */
export const SPECTRUM_COLUMNS: readonly ColumnSpec[] = [
  ...TUBE_COLUMNS,
  { stem: 'offset', field: 'offset_ppm', label: 'Offset', dimension: 'shift', role: 'x', required: true, help: 'Of the saturation; ppm or Hz', synonyms: OFFSET_WORDS },
  { stem: 'offsetHz', field: 'offset_Hz', label: 'Offset', dimension: 'frequency', role: 'x', required: true, help: 'Of the saturation, in Hz; turned into ppm by the field', synonyms: OFFSET_WORDS },
  { ...SIGNAL_COLUMN, label: 'Signal', help: 'Of water after saturation, or Z itself', synonyms: [...SIGNAL_COLUMN.synonyms, 'z', 'm', 'mz/m0', 's/s0', 'z spectrum', 'water signal', 'water intensity'] },
  SIGNAL_SD_COLUMN,
  aux('b1', 'b1_uT', 'B1', { dimension: 'pulseField', min: 0, help: 'Amplitude of the saturation, nominal; 0 marks a reading of S0', synonyms: ['b1', 'saturation b1', 'b1 nominal', 'nominal b1', 'saturation amplitude', 'saturation power', 'b1 amplitude'] }),
  aux('tsat', 'tsat_s', 'Saturation time', { dimension: 'time', above: 0, help: 'Length of the saturation', synonyms: ['tsat', 't sat', 'saturation time', 'saturation duration', 'saturation length', 'irradiation time'] }),
  aux('s0', 's0_au', 'S0', { dimension: 'signal', above: 0, help: 'Signal without saturation, before the spectrum', synonyms: ['s0', 'm0', 'unsaturated', 's0 before', 'reference signal', 'unsaturated signal'] }),
  aux('s0After', 's0After_au', 'S0, after', { dimension: 'signal', above: 0, help: 'Signal without saturation, after the spectrum', synonyms: ['s0 after', 'm0 after', 's0 end', 'unsaturated after'] }),
  aux('ph', 'pH', 'pH', { dimension: 'none', min: -1, max: 15, parts: true, help: 'Of the tube, where it is not that of all', synonyms: ['ph', 'ph value'] }),
  aux('temperature', 'temperature_K', 'Temperature', { dimension: 'temperature', parts: true, help: 'Of the tube, where it is not that of all', synonyms: ['temperature', 'temp', 'sample temperature'] }),
  aux('r1w', 'r1w_per_s', 'R1w', { dimension: 'rate', above: 0, bare: true, help: 'Longitudinal relaxation rate of water in this tube', synonyms: ['r1w', 'r1 water', 'water r1', 'r1'] }),
  aux('b1Scale', 'b1Scale', 'B1 scale', { dimension: 'fraction', above: 0, help: 'True B1 over the nominal one', synonyms: ['b1 scale', 'b1 factor', 'b1 ratio', 'relative b1', 'b1 map'] }),
  aux('b1Error', 'b1Se_frac', 'B1 scale, error', { dimension: 'fraction', min: 0, help: 'Standard error of the B1 scale', synonyms: ['b1 error', 'b1 scale error', 'b1 se', 'b1 uncertainty'] }),
]
