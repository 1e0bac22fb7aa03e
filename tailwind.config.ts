import type { Config } from 'tailwindcss';

/** Names of the design's tokens; their values stand once per theme in src/styles.css. */
const token = (name: string) => `var(--wm-${name})`;

export default {
  content: ['./index.html', './src/**/*.{ts,tsx}'],
  theme: {
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      paper: token('paper'),
      panel: token('panel'),
      white: token('white'),
      ink: token('ink'),
      soft: token('soft'),
      hair: token('hair'),
      water: token('water'),
      wash: token('wash'),
      mist: token('mist'),
      deep: token('deep'),
      slate: token('slate'),
      drift: token('drift'),
      driftwash: token('driftwash'),
      over: token('over'),
    },
    fontFamily: {
      mono: ['"Roboto Mono"', 'ui-monospace', 'monospace'],
      serif: ['"Source Serif 4"', 'Georgia', 'serif'],
    },
    fontSize: {
      label: ['0.75rem', '1rem'],
      body: ['0.8125rem', '1.25rem'],
      lead: ['0.9375rem', '1.375rem'],
      figure: ['1.375rem', '1.75rem'],
      sentence: ['1.0625rem', '1.5rem'],
      title: ['1.625rem', '2rem'],
    },
  },
} satisfies Config;
