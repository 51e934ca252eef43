/** Exact and leaped pilots side by side: work, price, speed, and how far apart their means are at the horizon. */
import { numberText } from '@/charts/number-text.ts';
import { Button } from '@/components/ui/Button.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { creditsText } from '@/components/ui/amounts-text.ts';
import type { MethodComparison as Comparison, QuoteDocument } from '@/contracts/jobs.ts';

/** Further observables are in the API's answer. */
const shownMost = 8;

export function MethodComparison({
  comparison,
  quote,
  onExact,
}: {
  comparison: Comparison;
  quote: Pick<QuoteDocument, 'epsilon'>;
  onExact: () => void;
}) {
  const { exact, exactRefused, leap } = comparison;
  if (exact === null)
    return (
      <Notice still tone="caution" className="mt-4" title="No exact pilot to compare with">
        {exactRefused}
      </Notice>
    );
  const rows: [string, string, string][] = [
    ['Events per replicate', eventsText(exact), eventsText(leap)],
    ['Expected credits', creditsText(exact.microcredits), creditsText(leap.microcredits)],
    ['Work per replicate', secondsText(exact.secondsPerReplicate), secondsText(leap.secondsPerReplicate)],
  ];
  return (
    <section aria-labelledby="comparison-title" className="mt-5">
      <h3 id="comparison-title" className="text-sm font-semibold">
        Beside the exact method
      </h3>
      <table className="ruled mt-1 w-full text-sm">
        <thead>
          <tr>
            <th scope="col">
              <span className="sr-only">What</span>
            </th>
            <th scope="col" className="figure">
              Exact
            </th>
            <th scope="col" className="figure">
              ε {numberText(quote.epsilon ?? NaN, 3)}
            </th>
          </tr>
        </thead>
        <tbody>
          {rows.map(([what, ofExact, ofLeap]) => (
            <tr key={what}>
              <th scope="row" className="!border-rule !align-top !font-normal">
                {what}
              </th>
              <td className="figure !align-top">{ofExact}</td>
              <td className="figure !align-top font-semibold">{ofLeap}</td>
            </tr>
          ))}
        </tbody>
      </table>
      {disadvantage(comparison) !== null && (
        <Notice
          still
          tone="caution"
          className="mt-3"
          title={`Leaping is ${disadvantage(comparison)} than exact here`}
          action={
            <Button size="small" onClick={onExact}>
              Use the exact method
            </Button>
          }
        >
          The exact method approximates nothing.
        </Notice>
      )}
      <Differences comparison={comparison} />
    </section>
  );
}

/** "dearer", "slower", or both; null where leaping is neither. */
export function disadvantage({ leapDearer, leapSlower }: Pick<Comparison, 'leapDearer' | 'leapSlower'>): string | null {
  const words = [...(leapDearer ? ['dearer'] : []), ...(leapSlower ? ['slower'] : [])];
  return words.length === 0 ? null : words.join(' and ');
}

function Differences({ comparison: { observables } }: { comparison: Comparison }) {
  const shown = observables.slice(0, shownMost);
  return (
    <>
      <table className="ruled mt-4 w-full text-sm">
        <caption className="text-left text-xs text-soft">
          Means at the horizon (of a sweep, at its first point): leaped less exact, with the 95 % interval of the pilots
        </caption>
        <thead>
          <tr>
            <th scope="col">Mean</th>
            <th scope="col" className="figure">
              Exact
            </th>
            <th scope="col" className="figure">
              Difference
            </th>
          </tr>
        </thead>
        <tbody>
          {shown.map(({ id, exactMean, difference, interval }) => (
            <tr key={id}>
              <th scope="row" className="!border-rule !align-top !font-normal [overflow-wrap:anywhere]">
                {id}
              </th>
              <td className="figure !align-top">{numberText(exactMean, 4)}</td>
              <td className="figure !align-top">
                <span className="font-semibold">{signed(difference)}</span>
                <span className="block text-xs text-soft">
                  {interval ? `${signed(interval.low)} … ${signed(interval.high)}` : 'no interval'}
                </span>
                {shifted(interval) && <span className="block text-xs text-methyl">leaves out 0</span>}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
      <p className="mt-2 text-xs text-soft">
        {observables.length > shown.length && `${observables.length - shown.length} more are in the quote. `}
        {shown.some(({ interval }) => shifted(interval))
          ? 'Where an interval leaves out 0, leaping shifts the mean by more than chance explains; a smaller ε brings it nearer.'
          : 'No interval leaves out 0: these pilots show no shift, which does not prove that there is none.'}
      </p>
    </>
  );
}

const shifted = (interval: { low: number; high: number } | null): boolean =>
  interval !== null && (interval.low > 0 || interval.high < 0);

const signed = (value: number): string => `${value > 0 ? '+' : ''}${numberText(value, 3)}`;

const eventsText = ({ eventsPerReplicate, oneSided }: NonNullable<Comparison['exact']>): string =>
  `${oneSided ? '≥ ' : ''}${numberText(eventsPerReplicate.mean, 3)}`;

function secondsText(seconds: number): string {
  if (seconds >= 1) return `${numberText(seconds, 2)} s`;
  return seconds >= 1e-3 ? `${numberText(seconds * 1e3, 2)} ms` : `${numberText(seconds * 1e6, 2)} µs`;
}
