/** A figure's place on the page: the chart itself, and all of ECharts with it, is loaded when it comes into view. */
import { createContext, lazy, Suspense, useContext, useEffect, useRef, useState } from 'react';
import { withNote } from '@/charts/with-note.ts';
import { Waiting } from '@/components/ui/Progress.tsx';
import type { FigureContent } from './figure.ts';

const Chart = lazy(() => import('./Chart.tsx'));

/** Words that stand inside every figure below; null for none. */
export const FigureNote = createContext<string | null>(null);

export function Figure(given: FigureContent) {
  const note = useContext(FigureNote);
  const content: FigureContent =
    note === null ? given : { ...given, option: (theme) => withNote(given.option(theme), note, theme) };
  const place = useRef<HTMLDivElement>(null);
  const [seen, setSeen] = useState(false);
  useEffect(() => {
    if (place.current === null) return;
    const observer = new IntersectionObserver(
      (entries) => {
        if (entries.some(({ isIntersecting }) => isIntersecting)) setSeen(true);
      },
      { rootMargin: '200px' },
    );
    observer.observe(place.current);
    return () => observer.disconnect();
  }, []);
  return (
    <div ref={place} className={content.compact ? 'min-h-[16rem]' : 'min-h-[24rem]'}>
      {seen && (
        <Suspense fallback={<Waiting>Loading the figure</Waiting>}>
          <Chart {...content} />
        </Suspense>
      )}
    </div>
  );
}
