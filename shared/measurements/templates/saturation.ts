import { phantomTemplates } from './phantom'

export const SATURATION_TEMPLATES = phantomTemplates({
  name: 't1-saturation-recovery', lines: ['Timing: repetition', 'Signal form: magnitude'], x: 'TR (ms)', values: [60, 120, 250, 500, 900, 1500, 2500, 4000, 7000, 12000], more: ['region SD', 'pixels'],
})
