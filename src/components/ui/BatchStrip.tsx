/**
 * A job's progress as one thin row of cells, one per batch, filling left to right, with gaps between points of a sweep.
 * One tab stop: arrows walk the cells, the line below tells what a cell holds.
 */
import { useRef, useState, type KeyboardEvent, type ReactNode } from 'react';
import { countText, creditsText } from './amounts-text.ts';
import { batchCells, type Batch, type BatchCell, type BatchState } from './batch-cells.ts';

const looks: Record<BatchState, string> = {
  done: 'bg-bromo border-bromo',
  running: 'hatched border-bromo',
  waiting: 'bg-glass border-rule',
  failed: 'bg-congo border-congo',
  discarded: 'bg-paper border-edge border-dashed',
};
const words: Record<BatchState, string> = {
  done: 'done',
  running: 'running',
  waiting: 'waiting',
  failed: 'failed',
  discarded: 'past the cap, not charged',
};

export interface BatchStripProps {
  batches: readonly Batch[];
  /** The words at the left: "6,400 of 10,000 replicates · 18.2 credits". */
  children?: ReactNode;
  /** The words at the right: "about 40 s left". */
  aside?: ReactNode;
  /** Names of sweep points, for the cell's line. */
  pointNames?: readonly string[];
  mostCells?: number;
}

export function BatchStrip({ batches, children, aside, pointNames, mostCells = 72 }: BatchStripProps) {
  const cells = batchCells(batches, mostCells);
  const [shown, setShown] = useState<number | null>(null);
  const [stop, setStop] = useState(0);
  const row = useRef<HTMLDivElement>(null);
  const tabStop = Math.min(stop, cells.length - 1);
  const shownCell = shown === null ? undefined : cells[shown];

  function walk(event: KeyboardEvent): void {
    const last = cells.length - 1;
    const next = {
      ArrowRight: Math.min(last, tabStop + 1),
      ArrowLeft: Math.max(0, tabStop - 1),
      Home: 0,
      End: last,
    }[event.key];
    if (next === undefined) return;
    event.preventDefault();
    row.current?.querySelectorAll<HTMLElement>('[data-cell]')[next]?.focus();
  }

  return (
    <div>
      <div
        ref={row}
        role="group"
        aria-label={`Batches: ${summary(batches)}. Arrow keys move between them.`}
        className="flex h-4 w-full gap-px sm:gap-0.5"
        onKeyDown={walk}
        onPointerLeave={() => setShown(null)}
      >
        {cells.map((cell, index) => (
          <button
            key={cell.first}
            type="button"
            data-cell
            tabIndex={index === tabStop ? 0 : -1}
            aria-label={cellWords(cell, pointNames)}
            onFocus={() => {
              setStop(index);
              setShown(index);
            }}
            onBlur={() => setShown(null)}
            onPointerEnter={() => setShown(index)}
            className={`min-w-0 flex-1 cursor-default border ${looks[cell.state]} ${
              index > 0 && cells[index - 1]?.point !== cell.point ? 'ml-1.5' : ''
            }`}
          />
        ))}
      </div>
      <div className="mt-1.5 flex min-h-6 flex-wrap justify-between gap-x-4 text-sm text-soft">
        {shownCell ? (
          <p className="text-ink">{cellWords(shownCell, pointNames)}</p>
        ) : (
          <>
            <p>{children}</p>
            {aside && <p>{aside}</p>}
          </>
        )}
      </div>
    </div>
  );
}

function summary(batches: readonly Batch[]): string {
  const done = batches.filter((batch) => batch.state === 'done').length;
  const failed = batches.filter((batch) => batch.state === 'failed').length;
  return `${done} of ${batches.length} done${failed > 0 ? `, ${failed} failed` : ''}`;
}

function cellWords(cell: BatchCell, pointNames: readonly string[] | undefined): string {
  const which = cell.first === cell.last ? `Batch ${cell.first}` : `Batches ${cell.first} to ${cell.last}`;
  const point = pointNames && pointNames.length > 1 ? ` of ${pointNames[cell.point] ?? `point ${cell.point + 1}`}` : '';
  const count = cell.last - cell.first + 1;
  const state = count > 1 && cell.state === 'running' ? `${cell.batches.done} of ${count} done` : words[cell.state];
  const measured =
    cell.events > 0
      ? ` · ${countText(cell.events)} events · ${creditsText(cell.chargedMicrocredits)} credits · ${cell.seconds.toFixed(1)} s`
      : '';
  return `${which}${point}: ${state} · ${countText(cell.replicates)} replicates${measured}`;
}
