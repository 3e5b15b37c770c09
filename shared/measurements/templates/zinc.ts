const LINES = ['Field: 20 MHz', 'Temperature: 37.0 °C', 'pH: 7.0', 'Complex: 2.5 mM', 'Zinc: 2.5 mM', 'Phosphate: 67 mM', 'R1 of the buffer: 0.38 1/s', 'Measured on: the complex itself', 'Date: 2026-11-30']
const TIMES_h = [0, 1, 2, 4, 8, 24, 48, 72, 96]

/** Files to fill in: the lines above the table are read as conditions. */
export const ZINC_TEMPLATES = [
  { fileName: 'zinc-phosphate-column-per-run.csv', text: [...LINES, '', 'Time (h),run 1,run 2,run 3', ...TIMES_h.map(time => `${time},,,`)].join('\r\n') + '\r\n' },
  { fileName: 'zinc-phosphate-long.csv', text: [...LINES, '', 'run,agent,batch,time (h),R1 (1/s),SE (1/s)', ...['1', '2', '3'].flatMap(run => TIMES_h.map(time => `run ${run},AGENT,BATCH,${time},,`))].join('\r\n') + '\r\n' },
] as const
