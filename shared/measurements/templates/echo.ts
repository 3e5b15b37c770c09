import { phantomTemplates } from './phantom'

export const ECHO_TEMPLATES = phantomTemplates({
  name: 't2-multi-echo', lines: ['Echo spacing: 10 ms', 'Refocusing angle: 180°', 'Signal form: magnitude'], x: 'TE (ms)', values: Array.from({ length: 32 }, (_, i) => 10 * (i + 1)), more: ['region SD', 'pixels'],
})
