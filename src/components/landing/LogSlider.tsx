/** A number over several powers of ten: a slider for the hand, a field for the exact value. */
import { useId, useState, type ReactNode } from 'react';
import { controlClass } from '@/components/ui/Field.tsx';
import { countText } from '@/components/ui/amounts-text.ts';

/** Slider positions per power of ten. */
const perDecade = 20;

const roundish = (value: number): number => Number(value.toPrecision(2));

export function LogSlider({
  label,
  hint,
  least,
  most,
  value,
  onChange,
}: {
  label: string;
  hint?: ReactNode;
  least: number;
  most: number;
  value: number;
  onChange: (value: number) => void;
}) {
  const id = useId();
  const [typed, setTyped] = useState<string | null>(null);
  const position = (number: number): number => Math.round(Math.log10(number / least) * perDecade);

  function type(text: string): void {
    setTyped(text);
    const number = Number(text.replace(/[\s,]/g, ''));
    if (Number.isInteger(number) && number >= least && number <= most) onChange(number);
  }
  const wrong = typed !== null && Number(typed.replace(/[\s,]/g, '')) !== value;
  return (
    <div>
      <div className="flex items-end justify-between gap-4">
        <label htmlFor={id} className="text-sm font-medium">
          {label}
        </label>
        <input
          id={id}
          inputMode="numeric"
          value={typed ?? countText(value)}
          onChange={(event) => type(event.target.value)}
          onBlur={() => setTyped(null)}
          aria-invalid={wrong || undefined}
          aria-describedby={`${id}-range`}
          className={`${controlClass} max-w-[9rem] text-right font-semibold`}
        />
      </div>
      <input
        type="range"
        aria-label={label}
        aria-valuetext={countText(value)}
        min={0}
        max={position(most)}
        value={position(value)}
        onChange={(event) => {
          setTyped(null);
          onChange(roundish(least * 10 ** (Number(event.target.value) / perDecade)));
        }}
        className="mt-2 block h-6 w-full accent-bromo"
      />
      <p id={`${id}-range`} className={`text-xs ${wrong ? 'font-medium text-congo' : 'text-soft'}`}>
        {wrong ? `A whole number from ${countText(least)} to ${countText(most)}.` : hint}
      </p>
    </div>
  );
}
