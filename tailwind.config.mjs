// Colours are CSS variables (src/styles/global.css), light and dark; Tailwind only names them. One type scale.
const variable = (name) => `rgb(var(--${name}) / <alpha-value>)`;
const colours = [
  'paper',
  'panel',
  'glass',
  'rule',
  'edge',
  'liquid',
  'ink',
  'soft',
  'phenol',
  'on-phenol',
  'bromo',
  'malachite',
  'methyl',
  'congo',
];

/** @type {import('tailwindcss').Config} */
export default {
  content: ['./src/**/*.{astro,ts,tsx,md,mdx}'],
  theme: {
    fontSize: {
      xs: ['0.75rem', '1.1rem'],
      sm: ['0.8438rem', '1.3rem'],
      base: ['0.9375rem', '1.5rem'],
      lg: ['1.0625rem', '1.65rem'],
      xl: ['1.3125rem', '1.75rem'],
      '2xl': ['1.75rem', '2.15rem'],
      '3xl': ['2.375rem', '2.7rem'],
      '4xl': ['3.125rem', '3.35rem'],
    },
    extend: {
      colors: Object.fromEntries(colours.map((name) => [name, variable(name)])),
      fontFamily: { sans: ['Manrope', 'system-ui', 'sans-serif'] },
      maxWidth: { prose: '42rem', page: '76rem' },
    },
  },
};
