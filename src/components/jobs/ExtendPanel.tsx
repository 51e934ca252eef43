/** More replicates for a finished job: how well the mean is known now, how well it would be, and what that costs. */
import { useRef, useState } from 'react';
import { countText, numberText } from '@/charts/number-text.ts';
import { observableTitle } from '@/charts/time-course-option.ts';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { Button } from '@/components/ui/Button.tsx';
import { announceBalanceChange } from '@/components/ui/column-events.ts';
import { TextField } from '@/components/ui/Field.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { Spinner } from '@/components/ui/Progress.tsx';
import { creditsText, durationText } from '@/components/ui/amounts-text.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { extendJob, type JobDocument } from '@/contracts/jobs.ts';
import { limits } from '@/domain/limits.ts';
import { replicatesForMean } from '@/engine/statistics/replicates-needed.ts';
import { normal95 } from '@/engine/statistics/wilson.ts';
import { laneWords, timeWithUnit } from './job-words.ts';
import { numberIn, passageRequestOf, type QuoteRequestBody } from './launch-settings.ts';
import type { NamedObservable, Results } from './results-data.ts';
import { useQuote } from './use-quote.ts';

interface Props {
  team: string;
  job: JobDocument;
  results: Results | null;
  onJob: (job: JobDocument) => void;
}

/** States that can be extended: the sample ended without a fault of the model. */
export const mayBeExtended = ({ state, replicatesDone }: JobDocument): boolean =>
  replicatesDone > 0 && (state === 'done' || state === 'stopped_at_cap' || state === 'cancelled');

export function ExtendPanel(props: Props) {
  const [open, setOpen] = useState(false);
  return (
    <section aria-labelledby="extend-title">
      <h2 id="extend-title" className="text-sm font-semibold">
        More replicates
      </h2>
      {open ? (
        <Extension {...props} />
      ) : (
        <>
          <p className="mt-1 text-sm text-soft">Adds to the same sample: nothing that is there is run or paid again.</p>
          <Button className="mt-3 w-full" onClick={() => setOpen(true)}>
            Find the price of more
          </Button>
        </>
      )}
    </section>
  );
}

function Extension({ team, job, results, onJob }: Props) {
  const known = precisionOf(results);
  const [more, setMore] = useState(String(suggestion(job, known)));
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const intent = useRef<{ quoteId: string; key: string } | null>(null);
  const replicates = numberIn(more);
  const most = limits.replicatesPerJob - job.replicatesDone;
  const fault =
    Number.isInteger(replicates) && replicates >= 1 && replicates <= most
      ? undefined
      : `A whole number from 1 to ${countText(most)}.`;
  const state = useQuote(team, fault === undefined ? requestFor(job, replicates) : null);
  const { quote } = state;

  async function extend(): Promise<void> {
    if (quote === null) return;
    if (intent.current?.quoteId !== quote.id) intent.current = { quoteId: quote.id, key: intentKey() };
    setPending(true);
    setProblem(null);
    const called = await callApi(extendJob, {
      path: { team, job: job.id },
      body: { quoteId: quote.id },
      idempotencyKey: intent.current.key,
    });
    setPending(false);
    if (called.ok) {
      announceBalanceChange();
      onJob(called.value.job);
    } else {
      setProblem(called.problem);
      if (called.problem.code === 'quote_expired') state.askAgain();
    }
  }

  const total = job.replicatesDone + (fault === undefined ? replicates : 0);
  return (
    <>
      <TextField
        label="Replicates to add"
        fieldClassName="mt-2"
        inputMode="numeric"
        autoComplete="off"
        value={more}
        error={fault}
        onChange={(event) => setMore(event.target.value)}
      />
      <dl className="facts mt-3 border-t border-rule">
        {known && (
          <>
            <div>
              <dt>
                Known to
                <span className="block text-xs">
                  mean of {observableTitle(known.observable)} at {timeWithUnit(job.horizon, job.timeUnit)}, 95 %
                </span>
              </dt>
              <dd>± {percent(known.relative)}</dd>
            </div>
            <div>
              <dt>Then about</dt>
              <dd>± {percent(known.relative * Math.sqrt(job.replicatesDone / total))}</dd>
            </div>
          </>
        )}
        <div>
          <dt>Would cost {state.asking && <Spinner className="ml-1 inline h-3 w-3" />}</dt>
          <dd className={state.stale ? 'border-b border-dashed border-rule' : ''}>
            {quote === null ? '…' : `${creditsText(quote.microcredits.expected)} credits`}
            {quote !== null && (
              <span className="block text-xs font-normal text-soft">
                {creditsText(quote.microcredits.low, 'down')} – {creditsText(quote.microcredits.high, 'up')}
              </span>
            )}
          </dd>
        </div>
        {quote !== null && (
          <div>
            <dt>{laneWords[job.lane].label} lane</dt>
            <dd>{durationText(quote.secondsByLane[job.lane])}</dd>
          </div>
        )}
      </dl>
      <Button
        variant="primary"
        className="mt-3 w-full"
        pending={pending}
        disabled={quote === null || state.stale}
        onClick={() => void extend()}
      >
        {quote === null ? 'Extend' : `Extend for up to ${creditsText(quote.microcredits.high, 'up')} credits`}
      </Button>
      {(problem ?? state.problem) && <ProblemNotice className="mt-3" problem={(problem ?? state.problem)!} />}
    </>
  );
}

/** Everything as in the job, so that the new replicates continue its sample. */
const requestFor = (job: JobDocument, replicates: number): QuoteRequestBody => ({
  modelVersionId: job.model.versionId,
  replicates,
  horizon: job.horizon,
  gridIntervals: job.gridIntervals,
  method: job.method,
  ...(job.epsilon === null ? {} : { epsilon: job.epsilon }),
  lane: job.lane,
  seed: job.seed,
  overrides: job.overrides,
  // The points as they are pinned: a grid asked for again would come to the same ones.
  ...(job.sweep ? { sweep: { kind: 'list' as const, targets: job.sweep.targets, values: job.sweep.values } } : {}),
  outputs: {
    keptTraces: job.keptTraces,
    ...(job.passages.length > 0 ? { passages: job.passages.map(passageRequestOf) } : {}),
  },
});

interface Precision {
  observable: NamedObservable;
  /** Half the width of the 95 % interval of the mean, as a part of the mean. */
  relative: number;
  variation: number;
}

/** For the first observable whose mean at the horizon is not 0. */
function precisionOf(results: Results | null): Precision | null {
  if (results === null) return null;
  const last = results.times.length - 1;
  for (const observable of results.observables) {
    const mean = Math.abs(observable.mean[last]!);
    const relative = (normal95 * observable.meanStandardError[last]!) / mean;
    if (relative > 0 && Number.isFinite(relative)) {
      return { observable, relative, variation: observable.sd[last]! / mean };
    }
  }
  return null;
}

/** Steps of precision that people ask for; the first finer than what is there is offered, else as many replicates again. */
const targets = [0.05, 0.02, 0.01, 0.005, 0.002, 0.001];

function suggestion(job: JobDocument, known: Precision | null): number {
  const target = known && targets.find((part) => part < known.relative * 0.95);
  const needed = known && target ? replicatesForMean(known.variation, target) - job.replicatesDone : job.replicatesDone;
  const rounded = Math.ceil(needed / 100) * 100;
  return Math.max(1, Math.min(rounded, limits.replicatesPerJob - job.replicatesDone));
}

const percent = (part: number): string => `${numberText(part * 100, 2)} %`;
