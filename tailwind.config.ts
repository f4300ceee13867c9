import type { Config } from 'tailwindcss'

/** Colours are named by meaning and come from app/assets/css/tokens.css, so both themes share one set of classes. */
const tokens = [
  'page', 'sheet', 'well', 'ink', 'ink-2', 'ink-3', 'line', 'line-strong', 'dusk', 'dusk-mid', 'dusk-soft',
  'dawn', 'dawn-mid', 'dawn-soft', 'gold', 'gold-mid', 'gold-soft', 'now', 'now-soft', 'today', 'today-soft',
  'week', 'week-soft', 'ok', 'ok-soft', 'focus', 'on-fill', 'sky-deep', 'band-1', 'band-2', 'band-3', 'band-4',
]

export default {
  content: ['./app/**/*.{vue,ts}'],
  darkMode: ['selector', '[data-theme="dim"]'],
  theme: {
    extend: {
      colors: Object.fromEntries(tokens.map(name => [name, `rgb(var(--${name}) / <alpha-value>)`])),
      fontFamily: { sans: ['var(--font)'] },
      fontSize: {
        fine: ['0.75rem', { lineHeight: '1.35' }],
        small: ['0.8125rem', { lineHeight: '1.4' }],
        body: ['0.9375rem', { lineHeight: '1.45' }],
        head: ['1.0625rem', { lineHeight: '1.35' }],
        lead: ['1.25rem', { lineHeight: '1.35' }],
        sentence: ['1.75rem', { lineHeight: '1.28' }],
        figure: ['2.5rem', { lineHeight: '1' }],
      },
      borderRadius: { field: 'var(--r-field)', sheet: 'var(--r-sheet)' },
      boxShadow: { lift: 'var(--lift)' },
      backgroundImage: { sky: 'var(--sky)' },
      minHeight: { row: 'var(--row)', thread: 'var(--thread)', touch: 'var(--touch)' },
      height: { row: 'var(--row)', thread: 'var(--thread)', touch: 'var(--touch)', band: 'var(--band-h)' },
      transitionTimingFunction: { rise: 'cubic-bezier(.2,.7,.2,1)' },
      transitionDuration: { fade: '140ms', rise: '320ms' },
    },
  },
} satisfies Config
