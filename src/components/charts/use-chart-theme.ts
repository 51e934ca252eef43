/** The figures' colours as the page shows them now: read from its CSS variables, followed when light turns to dark. */
import { useEffect, useState } from 'react';
import { darkTheme, lightTheme, type ChartTheme } from '@/charts/palette.ts';

const named = [
  'paper',
  'panel',
  'glass',
  'rule',
  'ink',
  'soft',
  'bromo',
  'methyl',
  'malachite',
  'phenol',
  'congo',
] as const;
const darkness = '(prefers-color-scheme: dark)';

function themeOfPage(): ChartTheme {
  const base = window.matchMedia(darkness).matches ? darkTheme : lightTheme;
  const style = getComputedStyle(document.documentElement);
  const colours = named.map((name) => {
    const triple = style.getPropertyValue(`--${name}`).trim();
    return [name, triple === '' ? base[name] : `rgb(${triple.split(/\s+/).join(', ')})`];
  });
  return { ...base, ...Object.fromEntries(colours) };
}

export function useChartTheme(): ChartTheme {
  const [theme, setTheme] = useState(themeOfPage);
  useEffect(() => {
    const query = window.matchMedia(darkness);
    const follow = (): void => setTheme(themeOfPage());
    query.addEventListener('change', follow);
    return () => query.removeEventListener('change', follow);
  }, []);
  return theme;
}
