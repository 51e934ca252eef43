/** Credits, money and moments in text: never broken over lines, tabular figures, machine-readable times. */
import {
  creditsText,
  creditsUnit,
  dayText,
  exactCreditsText,
  moneyText,
  momentText,
  type Rounding,
} from './amounts-text.ts';

/** "18.2 credits"; `exact` shows every digit, for ledgers. */
export function Credits({
  microcredits,
  exact = false,
  unit = true,
  rounding,
}: {
  microcredits: number;
  exact?: boolean;
  unit?: boolean;
  rounding?: Rounding;
}) {
  const figure = exact ? exactCreditsText(microcredits) : creditsText(microcredits, rounding);
  return (
    <data value={microcredits} className="whitespace-nowrap">
      {figure}
      {unit && ` ${creditsUnit(microcredits)}`}
    </data>
  );
}

export function Money({ amountMinor, currency }: { amountMinor: number; currency: string }) {
  return <span className="whitespace-nowrap">{moneyText(amountMinor, currency)}</span>;
}

export function Moment({ time, timeZone, dayOnly = false }: { time: string; timeZone?: string; dayOnly?: boolean }) {
  return (
    <time dateTime={time} className="whitespace-nowrap">
      {dayOnly ? dayText(time, timeZone) : momentText(time, timeZone)}
    </time>
  );
}
