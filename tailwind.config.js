import plugin from 'tailwindcss/plugin';

/**
 * Theme tokens. Paper and ink, one sea-green (tide) for the predicted signal and the main action, one warm
 * colour for pulses and alarms. Condition colours c1…c8 are of near-equal lightness in each theme; a condition
 * is always also told apart by its pattern and line style.
 */
const light = {
  paper: '#f5f1e8',
  sheet: '#fffdf8',
  ink: '#1c2a30',
  soft: '#566366',
  rule: '#ddd6c7',
  'rule-fine': '#ebe6da',
  'rule-strong': '#8a8778',
  tide: '#0f6b62',
  'tide-wash': '#e7efe9',
  warm: '#b1451f',
  'warm-wash': '#f8ebe3',
  amber: '#865b08',
  'amber-wash': '#f7efda',
  focus: '#1b5fb8',
  c1: '#b4583f',
  c2: '#3f7f8c',
  c3: '#7a7a2c',
  c4: '#8a62a6',
  c5: '#3f8457',
  c6: '#b0527d',
  c7: '#5676b5',
  c8: '#94703a'
};

const dim = {
  paper: '#10171a',
  sheet: '#161f22',
  ink: '#dfe7e4',
  soft: '#9aa9ab',
  rule: '#2c393d',
  'rule-fine': '#202b2f',
  'rule-strong': '#6d7c80',
  tide: '#63c6b6',
  'tide-wash': '#18302f',
  warm: '#f0916a',
  'warm-wash': '#34231d',
  amber: '#e0b35a',
  'amber-wash': '#302817',
  focus: '#8fbdf5',
  c1: '#dd8b72',
  c2: '#74b4c2',
  c3: '#b5b566',
  c4: '#bd9bd6',
  c5: '#79bb8e',
  c6: '#dd8bb0',
  c7: '#90abe0',
  c8: '#cda56a'
};

const variables = (tokens) => Object.fromEntries(Object.entries(tokens).map(([k, v]) => [`--${k}`, v]));
const colours = Object.fromEntries(Object.keys(light).map((k) => [k, `var(--${k})`]));

/** @type {import('tailwindcss').Config} */
export default {
  content: ['./src/**/*.{html,js,ts,svelte}'],
  theme: {
    extend: {
      colors: colours,
      fontFamily: { sans: ['"Atkinson Hyperlegible"', 'system-ui', 'sans-serif'] },
      borderRadius: { sheet: '5px' },
      fontSize: { fine: ['0.8125rem', '1.15rem'], body: ['0.9375rem', '1.4rem'] }
    }
  },
  plugins: [
    plugin(({ addBase }) => {
      addBase({
        ':root': { ...variables(light), 'color-scheme': 'light' },
        '@media (prefers-color-scheme: dark)': {
          ':root:not([data-theme="light"])': { ...variables(dim), 'color-scheme': 'dark' }
        },
        ':root[data-theme="dim"]': { ...variables(dim), 'color-scheme': 'dark' },
        body: {
          margin: '0',
          background: 'var(--paper)',
          color: 'var(--ink)',
          'font-family': '"Atkinson Hyperlegible", system-ui, sans-serif',
          'font-size': '0.9375rem',
          'line-height': '1.4',
          'font-variant-numeric': 'tabular-nums'
        },
        ':focus-visible': { outline: '2px solid var(--focus)', 'outline-offset': '2px' }
      });
    })
  ]
};
