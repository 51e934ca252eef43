/** The launch page: model version, changes, replicates, times, lane, with the quote beside it. */
import { useQuery } from '@tanstack/react-query';
import { useMemo, useRef, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { SelectField, TextField, RadioField } from '@/components/ui/Field.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { announceBalanceChange } from '@/components/ui/column-events.ts';
import { creditsText } from '@/components/ui/amounts-text.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { launchJob } from '@/contracts/jobs.ts';
import { readModel, readVersion } from '@/contracts/network.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { lanes, type Lane, type MethodFamily } from '@/domain/pricing/price-book.ts';
import { paths } from '@/paths.ts';
import { laneWords, rateText, timeWithUnit } from './job-words.ts';
import { capOf, faultsOfProblem, numberIn, quoteRequestOf, type LaunchSettings } from './launch-settings.ts';
import { MethodFields } from './MethodFields.tsx';
import { OverridesTable } from './OverridesTable.tsx';
import { PassageFields } from './PassageFields.tsx';
import { QuotePanel } from './QuotePanel.tsx';
import { StoppingFields } from './StoppingFields.tsx';
import { SweepFields } from './sweep/SweepFields.tsx';
import { noSweep, readSweepSettings } from './sweep/sweep-settings.ts';
import { useQuote } from './use-quote.ts';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

interface OpenVersion {
  id: string;
  number: number;
  network: NetworkDocument;
}

export interface LaunchFormProps {
  team: string;
  timeZone: string;
  models: { id: string; name: string }[];
  /** What the page opens with. */
  model: { id: string; name: string; latest: number };
  version: OpenVersion;
  settings: LaunchSettings;
  /** Where the settings come from, in a sentence. */
  origin: string | null;
  projectCodes: { id: string; code: string; client: string }[];
  availableMicrocredits: number | null;
  lanePrices: Record<Lane, Record<MethodFamily, number>>;
}

export function LaunchForm(props: LaunchFormProps) {
  return (
    <QueryProvider>
      <WhenLive>
        <Form {...props} />
      </WhenLive>
    </QueryProvider>
  );
}

function Form(props: LaunchFormProps) {
  const { team, timeZone, models, projectCodes, availableMicrocredits, lanePrices } = props;
  const [settings, setSettings] = useState(props.settings);
  const [chosen, setChosen] = useState({ model: props.model.id, number: props.version.number as number | null });
  const change = (next: Partial<LaunchSettings>): void => setSettings((known) => ({ ...known, ...next }));
  const opened = useOpenVersion(props, chosen);
  const { model, version } = opened;

  const read = useMemo(() => quoteRequestOf(settings, version), [settings, version]);
  const sweep = useMemo(() => readSweepSettings(settings.sweep, version.network), [settings.sweep, version]);
  const quoteState = useQuote(team, opened.ready && read.ok ? read.request : null);
  const { quote } = quoteState;
  const cap = capOf(settings.cap);
  const capMicrocredits = !cap.ok ? null : (cap.microcredits ?? quote?.microcredits.high ?? null);
  const capFault = !cap.ok
    ? cap.fault
    : quote !== null && cap.microcredits !== undefined && cap.microcredits < quote.leastCapMicrocredits
      ? `At least ${creditsText(quote.leastCapMicrocredits, 'up')} credits: room for 30 replicates.`
      : undefined;
  const faults = { ...(read.ok ? {} : read.faults), ...faultsOfProblem(quoteState.problem?.errors) };
  const unit = version.network.timeUnit ?? '';
  const horizon = numberIn(settings.horizon);
  const ownName = `${model.name}${horizon > 0 ? `, ${timeWithUnit(horizon, unit)}` : ''}`.slice(0, 200);

  const launch = useLaunch(team, () => ({
    quoteId: quote!.id,
    name: settings.name.trim() || ownName,
    ...(cap.ok && cap.microcredits !== undefined ? { capMicrocredits: cap.microcredits } : {}),
    ...(settings.projectCode ? { projectCode: settings.projectCode } : {}),
  }));

  return (
    <form
      className="gap-10 xl:grid xl:grid-cols-[minmax(0,1fr)_19rem]"
      noValidate
      onSubmit={(event) => event.preventDefault()}
    >
      <div className="min-w-0 space-y-6">
        {props.origin && (
          <Notice still title="Settings of an earlier job">
            {props.origin}
          </Notice>
        )}
        <div className="grid gap-4 sm:grid-cols-[minmax(0,1fr)_10rem]">
          <SelectField
            id="model"
            label="Model"
            value={chosen.model}
            error={faults['model']}
            choices={models.map(({ id, name }) => ({ value: id, label: name }))}
            onChange={(event) => {
              setChosen({ model: event.target.value, number: null });
              change({
                parameters: {},
                initialCounts: {},
                changeTimes: {},
                sweep: noSweep,
                passages: [],
                stopping: { ...settings.stopping, kind: 'replicates', observable: '' },
              });
            }}
          />
          <SelectField
            id="version"
            label="Version"
            value={String(version.number)}
            disabled={!opened.ready}
            choices={Array.from({ length: model.latest }, (_, index) => {
              const number = model.latest - index;
              return { value: String(number), label: `${number}${index === 0 ? ' (latest)' : ''}` };
            })}
            onChange={(event) => setChosen({ model: model.id, number: Number(event.target.value) })}
          />
        </div>
        {!opened.ready && !opened.problem && <Waiting>Opening the model</Waiting>}
        {opened.problem && (
          <Notice tone="failure" title="The model could not be opened">
            {opened.problem}
          </Notice>
        )}
        <div className="grid gap-4 sm:grid-cols-3">
          <TextField
            id="replicates"
            label={settings.sweep.kind === 'none' ? 'Replicates' : 'Replicates at each point'}
            inputMode="numeric"
            autoComplete="off"
            value={settings.replicates}
            error={faults['replicates']}
            onChange={(event) => change({ replicates: event.target.value })}
          />
          <TextField
            id="horizon"
            label="Horizon"
            {...(unit ? { unit } : {})}
            inputMode="decimal"
            autoComplete="off"
            value={settings.horizon}
            error={faults['horizon']}
            hint={unit ? undefined : "In the model's unit of time"}
            onChange={(event) => change({ horizon: event.target.value })}
          />
          <TextField
            id="grid"
            label="Grid intervals"
            inputMode="numeric"
            autoComplete="off"
            value={settings.gridIntervals}
            error={faults['gridIntervals']}
            hint={gridHint(settings, unit)}
            onChange={(event) => change({ gridIntervals: event.target.value })}
          />
        </div>
        <StoppingFields
          network={version.network}
          stopping={settings.stopping}
          horizon={settings.horizon}
          {...{ unit, faults, change }}
        />
        <MethodFields {...{ settings, faults, change }} />
        <OverridesTable key={version.id} network={version.network} {...{ settings, faults, change }} />
        <SweepFields
          network={version.network}
          settings={settings.sweep}
          sweep={sweep.ok ? sweep.sweep : undefined}
          replicates={numberIn(settings.replicates)}
          faults={faults}
          onChange={(next) => change({ sweep: next })}
        />
        <section aria-labelledby="more-title" className="border-t border-rule pt-4">
          <h2 id="more-title" className="mb-3 text-lg font-semibold">
            Job
          </h2>
          <div className="grid gap-4 sm:grid-cols-2">
            <TextField
              id="name"
              label="Name"
              value={settings.name}
              maxLength={200}
              placeholder={ownName}
              onChange={(event) => change({ name: event.target.value })}
            />
            <SelectField
              id="project-code"
              label="Project code"
              value={settings.projectCode}
              choices={[
                { value: '', label: 'None' },
                ...projectCodes.map(({ id, code, client }) => ({
                  value: id,
                  label: client ? `${code} · ${client}` : code,
                })),
              ]}
              onChange={(event) => change({ projectCode: event.target.value })}
            />
            <TextField
              id="seed"
              label="Seed"
              inputMode="numeric"
              autoComplete="off"
              value={settings.seed}
              placeholder="drawn for you"
              error={faults['seed']}
              hint="The same seed gives the same results; leave it empty for a new sample."
              onChange={(event) => change({ seed: event.target.value })}
            />
            <TextField
              id="traces"
              label="Traces to keep"
              inputMode="numeric"
              autoComplete="off"
              value={settings.keptTraces}
              error={faults['keptTraces']}
              hint="Whole replicates kept beside the statistics."
              onChange={(event) => change({ keptTraces: event.target.value })}
            />
          </div>
        </section>
        <PassageFields network={version.network} passages={settings.passages} {...{ faults, change }} />
        <RadioField
          legend="Lane"
          name="lane"
          value={settings.lane}
          choices={lanes.map((lane) => ({
            value: lane,
            label: laneWords[lane].label,
            hint: `${laneWords[lane].hint} · ${rateText(lanePrices[lane][settings.method])}`,
          }))}
          onChange={(lane) => change({ lane: lane as Lane })}
        />
      </div>
      <div className="mt-10 xl:sticky xl:top-6 xl:mt-0 xl:self-start xl:border-l xl:border-rule xl:pl-8">
        <QuotePanel
          {...{ team, timeZone, capMicrocredits, capFault, availableMicrocredits }}
          state={quoteState}
          hindered={!read.ok || !opened.ready}
          cap={settings.cap}
          launching={launch.pending}
          launchProblem={launch.problem}
          onCap={(text) => change({ cap: text })}
          onExact={() => change({ method: 'exact' })}
          onLaunch={() => void launch.go().then((code) => code === 'quote_expired' && quoteState.askAgain())}
        />
      </div>
    </form>
  );
}

function gridHint({ horizon, gridIntervals }: LaunchSettings, unit: string): string | undefined {
  const step = numberIn(horizon) / numberIn(gridIntervals);
  return step > 0 && Number.isFinite(step) ? `A value every ${timeWithUnit(step, unit)}` : undefined;
}

/** The model and version that are chosen; those the page came with need no request. */
function useOpenVersion(props: LaunchFormProps, chosen: { model: string; number: number | null }) {
  const { team } = props;
  const given = chosen.model === props.model.id && chosen.number === props.version.number;
  const query = useQuery({
    queryKey: ['model-version', team, chosen.model, chosen.number],
    enabled: !given,
    staleTime: 60_000,
    queryFn: async () => {
      const model = await callApi(readModel, { path: { team, model: chosen.model } });
      if (!model.ok) throw new Error(model.problem.detail);
      const latest = model.value.model.latestVersion.number;
      const version = await callApi(readVersion, {
        path: { team, model: chosen.model, version: String(chosen.number ?? latest) },
      });
      if (!version.ok) throw new Error(version.problem.detail);
      return {
        model: { id: chosen.model, name: model.value.model.name, latest },
        version: {
          id: version.value.version.id,
          number: version.value.version.number,
          network: version.value.network as NetworkDocument,
        },
      };
    },
  });
  // Until the new one is there, the last one stays in sight and nothing can be launched.
  const last = useRef<{ model: LaunchFormProps['model']; version: OpenVersion }>(props);
  if (given) last.current = props;
  else if (query.data) last.current = query.data;
  return {
    ...last.current,
    ready: given || query.data !== undefined,
    problem: given ? undefined : query.error?.message,
  };
}

type LaunchBody = { quoteId: string; name: string; capMicrocredits?: number; projectCode?: string };

/** Launches once: the same body sent again after a lost answer is the same intent. Resolves to the code of a refusal. */
function useLaunch(team: string, body: () => LaunchBody) {
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const intent = useRef<{ body: string; key: string } | null>(null);
  async function go(): Promise<string | null> {
    const wanted = body();
    const text = JSON.stringify(wanted);
    if (intent.current?.body !== text) intent.current = { body: text, key: intentKey() };
    setPending(true);
    setProblem(null);
    const called = await callApi(launchJob, { path: { team }, body: wanted, idempotencyKey: intent.current.key });
    if (called.ok) {
      announceBalanceChange();
      window.location.assign(paths.job(team, called.value.job.id));
      return null;
    }
    setPending(false);
    setProblem(called.problem);
    return called.problem.code;
  }
  return { pending, problem, go };
}
