/**
 * The palette lives as CSS variables in src/app.css (light and dark); Tailwind only names it.
 * @type {import('tailwindcss').Config}
 */
export default {
  content: ['./src/**/*.{html,svelte,ts}'],
  theme: {
    extend: {
      colors: {
        paper: 'var(--paper)',
        sheet: 'var(--sheet)',
        wash: 'var(--wash)',
        rule: { DEFAULT: 'var(--rule)', strong: 'var(--rule-strong)' },
        ink: { DEFAULT: 'var(--ink)', 2: 'var(--ink-2)', 3: 'var(--ink-3)' },
        mist: { DEFAULT: 'var(--mist)', 2: 'var(--mist-2)', soft: 'var(--mist-soft)' },
        a: { DEFAULT: 'var(--a)', soft: 'var(--a-soft)' },
        b: { DEFAULT: 'var(--b)', soft: 'var(--b-soft)' },
        ok: 'var(--ok)',
        warn: 'var(--warn)',
        bad: 'var(--bad)',
      },
      fontFamily: { sans: ["'Source Sans 3'", 'system-ui', 'sans-serif'] },
    },
  },
};
