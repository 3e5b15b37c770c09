const LINES = ['Temperature: 25.0 °C', 'Ionic strength: 1 M', 'Electrolyte: KCl', 'Which acid: HCl', 'Complex: 1 mM', 'Date: 2026-11-30']
const ACIDS_M = ['0.05', '0.1', '0.2', '0.5', '1']

/** A row per rate to fill in: acid or pH, and whichever metals were added. */
export const RATES_TEMPLATES = [
  { fileName: 'dissociation-rates.csv', text: [...LINES, '', 'agent,batch,acid (M),pH,zinc (mM),copper (mM),calcium (mM),temperature (°C),k (1/s),SE (1/s)', ...ACIDS_M.map(acid => `AGENT,BATCH,${acid},,,,,25,,`)].join('\r\n') + '\r\n' },
] as const
