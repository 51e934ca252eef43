/** The price before the run: credits with their range, time by lane, archive size, and the one button that launches. */
import { countText, numberText, valueWithError } from '@/charts/number-text.ts';
import { Button, ButtonLink } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { Spinner } from '@/components/ui/Progress.tsx';
import { bytesText, creditsText, durationText, momentText } from '@/components/ui/amounts-text.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import type { QuoteDocument } from '@/contracts/jobs.ts';
import { lanes } from '@/domain/pricing/price-book.ts';
import { paths } from '@/paths.ts';
import { laneWords, rateText } from './job-words.ts';
import { MethodComparison } from './MethodComparison.tsx';
import type { QuoteState } from './use-quote.ts';

interface Props {
  team: string;
  timeZone: string;
  state: QuoteState;
  /** The form has faults, so there is nothing to quote. */
  hindered: boolean;
  cap: string;
  capFault: string | undefined;
  /** What will be held: the cap, or the quote's high end. */
  capMicrocredits: number | null;
  availableMicrocredits: number | null;
  launching: boolean;
  launchProblem: ProblemDocument | null;
  onCap: (cap: string) => void;
  /** Wants the exact method instead. */
  onExact: () => void;
  onLaunch: () => void;
}

export function QuotePanel(props: Props) {
  const { team, timeZone, state, hindered, cap, capFault, capMicrocredits, availableMicrocredits } = props;
  const { quote, stale, asking, problem } = state;
  const tooLittle =
    capMicrocredits !== null && availableMicrocredits !== null && capMicrocredits > availableMicrocredits;
  const words = capMicrocredits === null ? '' : `${creditsText(capMicrocredits, 'up')} credits`;
  return (
    <section aria-labelledby="quote-title">
      <h2 id="quote-title" className="flex items-center gap-2 text-sm font-semibold">
        Quote {asking && <Spinner className="h-3.5 w-3.5" />}
      </h2>
      <p role="status" className="sr-only">
        {asking
          ? 'Asking for a new price'
          : quote && !stale
            ? `About ${creditsText(quote.microcredits.expected)} credits`
            : ''}
      </p>
      {quote === null && problem === null && (
        <p className="mt-1 text-sm text-soft">
          {hindered
            ? 'The price stands here once the fields marked on the left are mended.'
            : 'A pilot of real replicates is run to find the price. It costs nothing.'}
        </p>
      )}
      {quote !== null && (
        <QuoteFigures quote={quote} outdated={stale || asking} timeZone={timeZone} onExact={props.onExact} />
      )}
      {problem !== null && (
        <ProblemNotice
          problem={problem}
          className="mt-3"
          action={
            <Button size="small" onClick={state.askAgain}>
              Ask again
            </Button>
          }
        />
      )}
      <TextField
        id="cap"
        label="Cap"
        unit="credits"
        inputMode="decimal"
        autoComplete="off"
        fieldClassName="mt-4"
        value={cap}
        placeholder={quote === null ? '' : creditsText(quote.microcredits.high, 'up')}
        error={capFault}
        hint={
          quote !== null
            ? `The most the job may spend; at least ${creditsText(quote.leastCapMicrocredits, 'up')}. It stops there and keeps every replicate that fits.`
            : 'The most the job may spend.'
        }
        onChange={(event) => props.onCap(event.target.value)}
      />
      {tooLittle && (
        <Notice tone="caution" className="mt-3" title="The cap is more than the team has">
          {creditsText(availableMicrocredits, 'down')} credits are available. Lower the cap, ask for fewer replicates,
          or{' '}
          <a className="link" href={paths.credits(team)}>
            buy credits
          </a>
          .
        </Notice>
      )}
      <Button
        variant="primary"
        className="mt-4 w-full"
        pending={props.launching}
        disabled={
          quote === null || stale || hindered || capFault !== undefined || tooLittle || capMicrocredits === null
        }
        onClick={props.onLaunch}
      >
        {words === '' ? 'Launch' : `Launch for up to ${words}`}
      </Button>
      {props.launchProblem !== null && (
        <ProblemNotice
          className="mt-3"
          problem={props.launchProblem}
          action={
            props.launchProblem.code === 'insufficient_credits' ? (
              <ButtonLink size="small" href={paths.credits(team)}>
                Buy credits
              </ButtonLink>
            ) : undefined
          }
        />
      )}
      <p className="mt-3 text-xs text-soft">
        The pink line on the column shows where the credits would stand. Only events of complete replicates are charged;
        what is held and not used comes back.
        {quote?.method === 'leap' &&
          ' Of tau-leaping, each Poisson number drawn and each exact firing is an event, those of rejected leaps included.'}
      </p>
    </section>
  );
}

function QuoteFigures(props: { quote: QuoteDocument; outdated: boolean; timeZone: string; onExact: () => void }) {
  const { quote, outdated, timeZone } = props;
  const { microcredits, eventsPerReplicate, pilot, secondsByLane } = quote;
  const events = valueWithError(
    eventsPerReplicate.mean,
    eventsPerReplicate.sd / Math.sqrt(Math.max(1, pilot.replicates)),
  );
  const warnings = quote.problems.filter(({ severity }) => severity !== 'information');
  return (
    <div className={outdated ? 'border-l-2 border-dashed border-rule pl-3' : ''} aria-busy={outdated}>
      {outdated && <p className="mt-2 text-xs text-soft">For the inputs as they were; the new price is on its way.</p>}
      <p className="mt-2 text-3xl font-semibold">
        {creditsText(microcredits.expected)} <span className="text-base font-medium">credits</span>
      </p>
      <p className="text-sm text-soft">
        {quote.oneSided
          ? `at least ${creditsText(microcredits.low, 'down')}: some pilot replicates were cut short, so there is no upper end`
          : `95 %: ${creditsText(microcredits.low, 'down')} – ${creditsText(microcredits.high, 'up')}`}
      </p>
      <dl className="facts mt-3 border-t border-rule">
        <div>
          <dt>Events per replicate</dt>
          <dd>
            {events.value} <span className="font-normal text-soft">± {events.error}</span>
            <span className="block text-xs font-normal text-soft">
              SD {numberText(eventsPerReplicate.sd, 3)}, {countText(pilot.replicates)} pilot replicates
            </span>
          </dd>
        </div>
        {lanes.map((lane) => (
          <div key={lane}>
            <dt>{laneWords[lane].label} lane</dt>
            <dd className={lane === quote.lane ? '' : 'font-normal text-soft'}>{durationText(secondsByLane[lane])}</dd>
          </div>
        ))}
        <div>
          <dt>Archive</dt>
          <dd>about {bytesText(quote.archiveBytes)}</dd>
        </div>
        <div>
          <dt>Price</dt>
          <dd>{rateText(quote.microcreditsPerMillionEvents)}</dd>
        </div>
        <div>
          <dt>Holds until</dt>
          <dd>{momentText(quote.expiresAt, timeZone)}</dd>
        </div>
      </dl>
      {quote.comparison && <MethodComparison comparison={quote.comparison} quote={quote} onExact={props.onExact} />}
      {warnings.length > 0 && (
        <ul className="mt-3 list-disc pl-5 text-sm text-methyl">
          {warnings.slice(0, 5).map(({ path, message }) => (
            <li key={`${path} ${message}`}>{message}</li>
          ))}
        </ul>
      )}
    </div>
  );
}
