import type { Config } from 'tailwindcss'

/** Every colour is the name of a token in assets/css/tokens.css, so a theme is a change of variables and nothing else. */
const TOKENS = ['ground', 'pane', 'sunk', 'raised', 'lead', 'lead-soft', 'edge', 'ink', 'ink-2', 'ink-3', 'on-ink', 'iron', 'iron-2', 'iron-edge', 'iron-text', 'iron-dim', 'iron-bright',
  'lamp', 'lamp-ink', 'lamp-deep', 'lamp-wash', 'fault', 'fault-wash', 'on-fault', 'pick', 't1', 't2', 'cest', 'cest-text', 's1', 's2', 's3', 's4', 's5', 's6', 'grid', 'axis', 'm0', 'm1', 'veil']

export default {
  content: ['./app.vue', './error.vue', './components/**/*.{vue,ts}', './layouts/**/*.vue', './pages/**/*.vue', './composables/**/*.ts', './shared/**/*.ts'],
  darkMode: ['selector', '[data-theme="dark"]'],
  theme: {
    colors: { transparent: 'transparent', current: 'currentColor', ...Object.fromEntries(TOKENS.map(name => [name, `var(--${name})`])) },
    fontFamily: {
      sans: ['"Fira Sans"', 'ui-sans-serif', 'system-ui', 'sans-serif'],
      mono: ['"Fira Mono"', 'ui-monospace', 'monospace'],
    },
    fontSize: { tick: ['11px', '14px'], meta: ['12px', '16px'], table: ['13px', '18px'], body: ['14px', '20px'], pane: ['15px', '20px'], page: ['20px', '26px'], figure: ['26px', '32px'], door: ['30px', '40px'] },
    fontWeight: { normal: '400', medium: '500', semibold: '600' },
    borderRadius: { none: '0', sm: '3px', DEFAULT: '4px', float: '6px', full: '9999px' },
    boxShadow: { none: 'none', float: 'var(--lift)' },
    screens: { phone: { max: '640px' }, lap: '1024px', desk: '1280px', wide: '1440px' },
    extend: {
      spacing: { iron: '44px', head: '52px', field: '32px', touch: '44px' },
      gridTemplateColumns: { side: 'minmax(0,1fr) 332px', bench: 'minmax(0,1fr) 372px', check: '216px minmax(0,1fr) 412px', upload: '316px minmax(0,1fr) 348px' },
      transitionDuration: { quick: '120ms', calm: '200ms' },
      transitionTimingFunction: { calm: 'cubic-bezier(.2,0,0,1)' },
    },
  },
} satisfies Config
