import { phantomTemplates } from './phantom'

export const LOOK_LOCKER_TEMPLATES = phantomTemplates({
  name: 't1-look-locker', lines: ['Read-out angle: 8°', 'Pulse spacing: 80 ms', 'Signal form: magnitude'], x: 'TI (ms)', values: Array.from({ length: 24 }, (_, i) => 40 + 160 * i), more: ['region SD', 'pixels'],
})
