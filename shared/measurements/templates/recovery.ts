const LINES = ['Instrument: Scanner 1', 'Field: 3 T', 'Temperature: 37.0 ± 0.2 °C', 'pH: 7.4', 'Medium: plasma', 'Timing: constant TR', 'TR: 12 s', 'Signal form: magnitude', 'Concentration basis: ICP', 'Stock error: 1.5 %', 'Date: 2026-11-30']
const TIMES_ms = [50, 100, 200, 400, 700, 1000, 1500, 2500, 4000, 8000]
const TUBES = ['0 mM', '0.10 mM', '0.25 mM', '0.50 mM', '1.00 mM']

/** Files to fill in: the lines above the table are read as conditions and may be left out. */
export const RECOVERY_TEMPLATES = [
  {
    fileName: 't1-inversion-recovery-column-per-tube.csv',
    text: [...LINES, '', ['TI (ms)', 'blank', ...TUBES.slice(1).map(conc => `AGENT ${conc}`)].join(','), ...TIMES_ms.map(ti => [ti, ...TUBES.map(() => '')].join(','))].join('\r\n') + '\r\n',
  },
  {
    fileName: 't1-inversion-recovery-long.csv',
    text: [...LINES, '', 'tube,agent,batch,conc (mM),conc error (mM),TI (ms),signal,SD', ...TUBES.flatMap((conc, j) => TIMES_ms.map(ti => [`t${j + 1}`, j === 0 ? '' : 'AGENT', j === 0 ? '' : 'BATCH', conc.replace(' mM', ''), '', ti, '', ''].join(',')))].join('\r\n') + '\r\n',
  },
  {
    fileName: 't1-inversion-recovery-row-per-tube.csv',
    text: [...LINES, '', ['tube', 'agent', 'batch', 'conc (mM)', ...TIMES_ms.map(ti => `${ti} ms`)].join(','), ...TUBES.map((conc, j) => [`t${j + 1}`, j === 0 ? '' : 'AGENT', j === 0 ? '' : 'BATCH', conc.replace(' mM', ''), ...TIMES_ms.map(() => '')].join(','))].join('\r\n') + '\r\n',
  },
] as const
