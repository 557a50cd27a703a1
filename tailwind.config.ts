import type { Config } from 'tailwindcss';

/** The theme only names the custom properties of src/tokens.css, so light and dark need no variants. */
const config: Config = {
  content: ['./index.html', './src/**/*.{ts,tsx}'],
  theme: {
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      paper: 'var(--paper)',
      sheet: 'var(--sheet)',
      rule: { DEFAULT: 'var(--rule)', strong: 'var(--rule-strong)' },
      ink: { DEFAULT: 'var(--ink)', soft: 'var(--ink-soft)' },
      creosote: 'var(--creosote)',
      'on-creosote': { DEFAULT: 'var(--on-creosote)', soft: 'var(--on-creosote-soft)' },
      verdigris: 'var(--verdigris)',
      'on-verdigris': 'var(--on-verdigris)',
      slate: 'var(--slate)',
      ochre: 'var(--ochre)',
      oxide: 'var(--oxide)',
      stock: 'var(--stock)',
      plate: 'var(--plate)',
      wash: {
        verdigris: 'var(--wash-verdigris)',
        ochre: 'var(--wash-ochre)',
        oxide: 'var(--wash-oxide)',
      },
    },
    fontFamily: {
      sans: ['"IBM Plex Sans"', 'sans-serif'],
      condensed: ['"IBM Plex Sans Condensed"', '"IBM Plex Sans"', 'sans-serif'],
      mono: ['"IBM Plex Mono"', 'monospace'],
    },
    fontSize: {
      small: ['0.75rem', '1rem'],
      note: ['0.8125rem', '1.125rem'],
      table: ['0.875rem', '1.25rem'],
      body: ['0.9375rem', '1.5rem'],
      lead: ['1.125rem', '1.5rem'],
      sentence: ['1.6875rem', '2.3125rem'],
      'sentence-narrow': ['1.375rem', '1.875rem'],
      mark: ['2.25rem', '2.75rem'],
    },
    spacing: {
      0: '0px',
      px: '1px',
      2: '2px',
      4: '4px',
      6: '6px',
      8: '8px',
      12: '12px',
      16: '16px',
      20: '20px',
      24: '24px',
      32: '32px',
      36: '36px',
      48: '48px',
      52: '52px',
    },
    borderRadius: { none: '0', DEFAULT: '2px' },
    screens: { sm: '560px', md: '768px', lg: '1024px', xl: '1280px' },
  },
};

export default config;
