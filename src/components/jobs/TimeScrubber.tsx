/** Chooses a grid time: a slider that the keyboard moves step by step, ten by ten, or to the ends. */
import { useId } from 'react';
import { timeWithUnit } from './job-words.ts';

export function TimeScrubber(props: {
  times: readonly number[];
  timeUnit: string | undefined;
  index: number;
  onIndex: (index: number) => void;
}) {
  const { times, timeUnit, index, onIndex } = props;
  const id = useId();
  const words = timeWithUnit(times[index] ?? 0, timeUnit);
  return (
    <div className="min-w-[14rem] grow">
      <label htmlFor={id} className="mb-1 flex justify-between text-sm font-medium">
        Time <span>{words}</span>
      </label>
      <input
        id={id}
        type="range"
        min={0}
        max={times.length - 1}
        step={1}
        value={index}
        aria-valuetext={words}
        onChange={(event) => onIndex(Number(event.target.value))}
        className="h-10 w-full accent-bromo"
      />
    </div>
  );
}
