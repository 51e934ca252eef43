// Colours are CSS variables (src/styles/global.css), light and dark; Tailwind only names them.
const variable = (name) => `rgb(var(--${name}) / <alpha-value>)`;

/** @type {import('tailwindcss').Config} */
export default {
  content: ['./src/**/*.{astro,ts,tsx,md,mdx}'],
  theme: {
    extend: {
      colors: Object.fromEntries(
        [
          'paper',
          'panel',
          'glass',
          'rule',
          'ink',
          'soft',
          'phenol',
          'on-phenol',
          'bromo',
          'malachite',
          'methyl',
          'congo',
        ].map((name) => [name, variable(name)]),
      ),
      fontFamily: { sans: ['Manrope', 'system-ui', 'sans-serif'] },
    },
  },
};
