import { phantomTemplates } from './phantom'

export const FLIP_TEMPLATES = phantomTemplates({
  name: 't1-variable-flip-angle', lines: ['TR: 15 ms', 'TE: 2 ms'], x: 'flip angle (deg)', values: [2, 4, 6, 9, 12, 16, 20, 25, 30], more: ['B1 scale'], rows: ['B1 scale'],
})
