const LINES = [
  'Metal: Gd', 'Temperature: 25.0 °C', 'Ionic strength: 0.1 M', 'Electrolyte: KCl', 'pKw: 13.78', 'pH scale: concentration', 'Ligand protons: 4', 'Protonation constants: 11.5; 9.6; 4.5; 4.2', 'Initial volume: 20 mL', 'Base: 100 mM', 'Date: 2026-11-30',
]
const VOLUMES_mL = [0.05, 0.1, 0.2, 0.3, 0.4, 0.6, 0.8, 1, 1.2, 1.4, 1.6, 1.8, 2]
const file = (fileName: string, lines: readonly string[]) => ({ fileName, text: [...lines].join('\r\n') + '\r\n' })
/** Name, ligand, metal and strong acid of a curve, mM. */
const CURVES = [['strong acid', 0, 0, 5], ['ligand', 2, 0, 3], ['ligand and metal', 2, 2, 3]] as const
const FLASKS_mL = [0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.8]

/** Files to fill in: the lines above the table are read as conditions. */
export const TITRATION_TEMPLATES = [
  file('titration-long.csv', [...LINES, '', 'curve,agent,batch,ligand (mM),metal (mM),acid (mM),base added (mL),E (mV)',
    ...CURVES.flatMap(([name, ligand, metal, acid]) => VOLUMES_mL.map(v => [name, ligand === 0 ? '' : 'AGENT', ligand === 0 ? '' : 'BATCH', ligand, metal, acid, v, ''].join(',')))]),
  file('titration-batch.csv', [...LINES, '', 'curve,agent,batch,ligand (mM),metal (mM),acid (mM),vessel (mL),base added (mL),pH', ...FLASKS_mL.map((v, i) => ['flasks', 'AGENT', 'BATCH', 2, 2, 12 - i, 10, v, ''].join(','))]),
] as const
