const LINES = ['Field: 7 T', 'Temperature: 25.0 °C', 'pH: 7.4', 'Medium: buffer', 'Pool offset: 50 ppm', 'Pool width: 4 ppm', 'Exchanging protons: 2', 'R1w: 0.4', 'R2 of the pool: 50', 'S0 from: 300 ppm', 'Date: 2026-11-30']
const OFFSETS_ppm = [-300, -70, -60, -55, -52, -50, -48, -45, -30, -10, -5, -2, -1, -0.5, 0, 0.5, 1, 2, 5, 10, 30, 45, 48, 50, 52, 55, 60, 70, 300]
const B1_uT = [2, 4, 8, 12]
const file = (fileName: string, lines: readonly string[]) => ({ fileName, text: [...lines].join('\r\n') + '\r\n' })

/** Files to fill in: rows in the order in which they were measured; far offsets are S0, before and after. */
export const SPECTRUM_TEMPLATES = [
  file('z-spectra-column-per-spectrum.csv', [
    ...LINES, '', ['Concentration (mM)', ...B1_uT.map(() => '20')].join(','), ['B1 (µT)', ...B1_uT].join(','), ['Saturation time (s)', ...B1_uT.map(() => '12')].join(','),
    ['Offset (ppm)', ...B1_uT.map(b1 => `tube 1 at ${b1} µT`)].join(','), ...OFFSETS_ppm.map(offset => [offset, ...B1_uT.map(() => '')].join(',')),
  ]),
  file('z-spectra-long.csv', [
    ...LINES, '', 'tube,agent,batch,conc (mM),pH,temperature (°C),R1w (1/s),B1 scale,B1 (µT),saturation time (s),offset (ppm),signal',
    ...B1_uT.flatMap(b1 => OFFSETS_ppm.map(offset => ['t1', 'AGENT', 'BATCH', '20', '7.4', '25', '0.4', '1', b1, '12', offset, ''].join(','))),
  ]),
] as const
