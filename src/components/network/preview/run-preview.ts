/** Runs a few dozen replicates of a draft by the same engine as jobs, in a stream of their own, within a small budget. */
import { describeFailure } from '@/domain/jobs/job-inputs.ts';
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { meanField } from '@/engine/meanfield/mean-field.ts';
import { previewHorizon } from '@/engine/preview-horizon.ts';
import { runBatch } from '@/engine/run-batch.ts';
import type { MeanFieldCurves, PreviewAnswer, PreviewTask, PreviewTraces } from './preview-protocol.ts';

export const previewReplicates = 24;
const gridIntervals = 120;
/** Firings that all replicates together may spend: a fraction of a second. */
const eventBudget = 2_000_000;
/** Larger networks' rate equations may take longer than a glance. */
const meanFieldSpeciesMost = 100;

/** Answers one after the other: traces, then the mean field; or the reason for none. */
export async function* runPreview({ turn, network, horizon }: PreviewTask): AsyncGenerator<PreviewAnswer> {
  const resolved = resolveNetwork(network);
  if (!resolved.ok || resolved.network.observables.length === 0) {
    yield { turn, kind: 'none', waits: true, reason: 'Traces are drawn here once the model has no errors.' };
    return;
  }
  const until = horizon ?? (await previewHorizon(resolved.network)) ?? 1;
  const ran = await runTraces(resolved.network, network, until);
  if (typeof ran === 'string') {
    yield { turn, kind: 'none', waits: false, reason: ran };
    return;
  }
  yield { turn, kind: 'traces', preview: ran };
  const curves = solve(resolved.network, until);
  if (curves) yield { turn, kind: 'meanField', curves };
}

async function runTraces(
  network: ResolvedNetwork,
  document: NetworkDocument,
  horizon: number,
): Promise<PreviewTraces | string> {
  const started = performance.now();
  const answer = await runBatch({
    network,
    horizon,
    gridIntervals,
    seed: '0',
    purpose: 'preview',
    point: 0,
    firstReplicate: 0,
    replicateCount: previewReplicates,
    keptTraces: previewReplicates,
    eventBudgetPerReplicate: null,
    eventBudgetPerBatch: eventBudget,
  });
  if (answer.replicateCount === 0)
    return answer.failure
      ? describeFailure(answer.failure).split('. ')[0]! + '.'
      : `One replicate takes more than ${eventBudget.toLocaleString('en-GB')} events until time ${horizon}; look at a shorter time.`;
  const names = new Map([...document.species, ...(document.observables ?? [])].map(({ id, name }) => [id, name]));
  return {
    horizon,
    times: gridTimes(horizon, gridIntervals),
    observables: network.observables.map(({ id }) => ({ id, name: names.get(id) })),
    traces: answer.traces.map(({ values }) => values),
    replicatesAsked: previewReplicates,
    events: answer.eventsPerReplicate.reduce((sum, events) => sum + events, 0),
    milliseconds: performance.now() - started,
  };
}

function solve(network: ResolvedNetwork, horizon: number): MeanFieldCurves | null {
  if (network.species.length > meanFieldSpeciesMost) return null;
  const solution = meanField({ network, horizon, gridIntervals });
  return solution.ok ? { observables: solution.observables } : null;
}
