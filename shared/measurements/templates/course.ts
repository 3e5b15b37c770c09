const LINES = ['Signal: relaxation rate', 'Temperature: 25.0 °C', 'Ionic strength: 1 M', 'Electrolyte: KCl', 'Which acid: HCl', 'Complex: 1 mM', 'Date: 2026-11-30']
const ACIDS_M = ['0.05', '0.1', '0.2', '0.5', '1']
const TIMES_h = [0, 2, 5, 10, 20, 40, 80, 160]
const file = (fileName: string, lines: readonly string[]) => ({ fileName, text: [...lines].join('\r\n') + '\r\n' })

/** Files to fill in: the lines above the table are read as conditions and may be left out; end and start where they are known. */
export const COURSE_TEMPLATES = [
  file('dissociation-column-per-flask.csv', [
    ...LINES, '', ['Acid (M)', ...ACIDS_M].join(','), ['Zinc (mM)', ...ACIDS_M.map(() => '0')].join(','), ['Temperature (°C)', ...ACIDS_M.map(() => '25')].join(','),
    ['Time (h)', ...ACIDS_M.map((_, i) => `flask ${i + 1}`)].join(','), ...TIMES_h.map(time => [time, ...ACIDS_M.map(() => '')].join(',')),
  ]),
  file('dissociation-long.csv', [
    ...LINES, '', 'flask,agent,batch,complex (mM),acid (M),pH,zinc (mM),copper (mM),calcium (mM),temperature (°C),time (h),signal,SD,end,start',
    ...ACIDS_M.flatMap((acid, i) => TIMES_h.map(time => [`f${i + 1}`, 'AGENT', 'BATCH', '1', acid, '', '', '', '', '25', time, '', '', '', ''].join(','))),
  ]),
] as const
