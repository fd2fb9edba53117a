import type { Config } from 'tailwindcss'

/** A colour token of app/assets/css/main.css as a Tailwind colour that takes an opacity. */
const token = (name: string) => `oklch(var(--${name}) / <alpha-value>)`

export default {
  darkMode: 'class',
  content: ['./app/**/*.{vue,ts}'],
  theme: {
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      paper: token('paper'),
      wash: token('wash'),
      hairline: token('hairline'),
      outline: token('outline'),
      ink: token('ink'),
      muted: token('muted'),
      slate: token('slate'),
      glacier: token('glacier'),
      'glacier-text': token('glacier-text'),
      ember: token('ember'),
      'ember-text': token('ember-text'),
      fault: token('fault'),
      moss: token('moss'),
    },
    fontFamily: {
      sans: ["'Source Sans 3'", 'system-ui', 'sans-serif'],
      mono: ['ui-monospace', 'SFMono-Regular', 'Menlo', 'Consolas', 'monospace'],
    },
    // The root is 15 px; nothing that is read falls below 12 px.
    fontSize: {
      small: ['0.8667rem', { lineHeight: '1.35' }],
      base: ['1rem', { lineHeight: '1.45' }],
      heading: ['1.2rem', { lineHeight: '1.3' }],
      title: ['1.6rem', { lineHeight: '1.2', letterSpacing: '-0.01em' }],
      display: ['2.4rem', { lineHeight: '1.1', letterSpacing: '-0.015em' }],
    },
    extend: {
      maxWidth: { page: '72rem', prose: '38rem' },
      transitionDuration: { DEFAULT: '120ms' },
    },
  },
} satisfies Config
