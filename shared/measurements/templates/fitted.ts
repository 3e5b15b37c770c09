const LINES = ['Instrument: Relaxometer 1', 'Field: 60 MHz', 'Temperature: 37.0 ± 0.2 °C', 'pH: 7.4', 'Medium: buffer', 'Buffer: 50 mM HEPES', 'Concentration basis: ICP', 'Stock error: 1.5 %', 'Date: 2026-11-30']
const CONCS_mM = ['0', '0.10', '0.25', '0.50', '1.00']

/** Files to fill in: the lines above the table are read as conditions and may be left out. */
export const FITTED_TEMPLATES = [
  {
    fileName: 'fitted-t1-row-per-tube.csv',
    text: [...LINES, '', 'tube,agent,batch,conc (mM),conc error (mM),T1 (ms),SE (ms)', ...CONCS_mM.map((conc, j) => [`t${j + 1}`, j === 0 ? '' : 'AGENT', j === 0 ? '' : 'BATCH', conc, '', '', ''].join(','))].join('\r\n') + '\r\n',
  },
  {
    fileName: 'fitted-r2-column-per-tube.csv',
    text: [...LINES, '', ['tube', ...CONCS_mM.map((_, j) => `v${j + 1}`)], ['agent', '', ...CONCS_mM.slice(1).map(() => 'AGENT')], ['conc (mM)', ...CONCS_mM], ['R2 (1/s)', ...CONCS_mM.map(() => '')], ['SE (1/s)', ...CONCS_mM.map(() => '')]]
      .map(row => typeof row === 'string' ? row : row.join(',')).join('\r\n') + '\r\n',
  },
] as const
