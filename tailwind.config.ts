import type { Config } from 'tailwindcss'

/** A colour role; its value per scheme stands in app/assets/css/tailwind.css. */
const role = (name: string) => `rgb(var(--${name}) / <alpha-value>)`

export default {
  content: ['./app/**/*.{vue,ts}'],
  darkMode: 'media',
  theme: {
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      paper: role('paper'), sheet: role('sheet'), ink: role('ink'), soft: role('soft'), rule: role('rule'), edge: role('edge'),
      leaf: { DEFAULT: role('leaf'), wash: role('leaf-wash') },
      ochre: { DEFAULT: role('ochre'), wash: role('ochre-wash') },
      madder: { DEFAULT: role('madder'), wash: role('madder-wash') },
      slate: { DEFAULT: role('slate'), wash: role('slate-wash') },
    },
    fontFamily: {
      sans: ['"Source Sans 3"', 'sans-serif'],
      serif: ['"Source Serif 4"', 'serif'],
      mono: ['"Source Code Pro"', 'monospace'],
    },
  },
} satisfies Config
