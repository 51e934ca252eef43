/** Checks what a contract cannot: a quote request against the model version, the limits and what is built so far. */
import type { z } from 'zod';
import type { quoteRequest } from '@/contracts/jobs.ts';
import { networksOf, type PointNetworks } from '@/domain/jobs/networks-of.ts';
import { planSweep } from '@/domain/jobs/plan-sweep.ts';
import { overridePath, pointWords, type Sweep } from '@/domain/jobs/sweep.ts';
import { splitMix64 } from '@/engine/random/splitmix64.ts';
import { uniform53, Xoshiro256 } from '@/engine/random/xoshiro256.ts';
import type { PassageInput } from '@/domain/jobs/job-inputs.ts';
import type { PrecisionTarget } from '@/domain/jobs/precision.ts';
import { prepareNetwork } from '@/engine/kernel/prepare-network.ts';
import { largestLeapingNetwork } from '@/engine/leaping/tau-leaping.ts';
import { limits } from '@/domain/limits.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { accept, refuse, type InputFault, type Result } from '@/domain/refusals.ts';

export type QuoteRequest = z.output<typeof quoteRequest>;

export interface CheckedRequest {
  /** By point. */
  networks: ResolvedNetwork[];
  /** Undefined without one. */
  sweep: Sweep | undefined;
}

/** The networks of the request's points, or every fault found. */
export function checkQuoteRequest(request: QuoteRequest, document: NetworkDocument): Result<CheckedRequest> {
  const planned = sweepOf(request, document);
  if (!planned.ok) return planned;
  const sweep = planned.value;
  const resolved = networksOf(document, { overrides: request.overrides ?? {}, sweep });
  if (!resolved.ok) return unrunnable(resolved, sweep);
  const network = resolved.networks[0]!;
  const faults = [
    ...unknownPassages(request, network),
    ...unfitCorrelations(request, network, resolved.networks.length),
    ...unfitStopping(request, network),
    ...unfitMethod(request, network),
    ...tooLarge(request, network, resolved.networks.length),
  ];
  return faults.length > 0
    ? refuse('invalid_input', faults.map(({ message }) => message).join(' '), { errors: faults })
    : accept({ networks: resolved.networks, sweep });
}

function sweepOf({ sweep: asked }: QuoteRequest, document: NetworkDocument): Result<Sweep | undefined> {
  if (!asked) return accept(undefined);
  const seed = asked.kind === 'latin_hypercube' ? (asked.seed ?? 0) : 0;
  const stream = new Xoshiro256(splitMix64(BigInt(seed), 4));
  const planned = planSweep(asked, () => uniform53(stream.next()));
  if (!planned.ok)
    return refuse('invalid_input', planned.faults.map(({ message }) => message).join(' '), { errors: planned.faults });
  const work = planned.sweep.values.length * document.reactions.length;
  if (work <= limits.sweepReactions) return accept(planned.sweep);
  const message =
    `${planned.sweep.values.length} points of ${document.reactions.length.toLocaleString('en')} reactions are too much for one ` +
    `sweep: points times reactions may be ${limits.sweepReactions.toLocaleString('en')}.`;
  return refuse('invalid_input', message, { errors: [{ path: 'sweep', code: 'too_many_points', message }] });
}

/** A value of a point that does not fit is told under the sweep, with the point's number. */
function unrunnable(
  { point, problems }: Extract<PointNetworks, { ok: false }>,
  sweep: Sweep | undefined,
): Result<never> {
  const ofOverrides = problems.filter(({ path }) => path.startsWith('overrides.'));
  const ofPoint = (sweep?.targets ?? []).flatMap((target) =>
    ofOverrides.filter(({ path }) => path === overridePath(target)),
  );
  if (ofPoint.length > 0)
    return refuse('invalid_input', `Point ${point} does not fit the model: ${ofPoint[0]!.message}`, {
      errors: ofPoint.map(({ code, message }) => ({ path: `sweep.points[${point}]`, code, message })),
    });
  if (ofOverrides.length > 0)
    return refuse('invalid_input', 'Some overrides do not fit the model.', { errors: ofOverrides.map(fault) });
  const where = sweep ? `At point ${point} (${pointWords(sweep, point)}) the model` : 'This version of the model';
  return refuse('invalid_network', `${where} cannot run.`, { errors: problems.map(fault) });
}

const fault = ({ path, code, message }: InputFault): InputFault => ({ path, code, message });

/** What tau-leaping cannot run, and ε where nothing leaps. */
function unfitMethod({ method, epsilon }: QuoteRequest, { changes, reactions }: ResolvedNetwork): InputFault[] {
  if (method === 'exact')
    return epsilon === undefined
      ? []
      : [
          {
            path: 'epsilon',
            code: 'not_used',
            message: 'ε belongs to tau-leaping; leave it out for the exact method.',
          },
        ];
  const triggered = changes?.find(({ when }) => when.kind === 'condition');
  const faults: InputFault[] = [];
  if (triggered)
    faults.push({
      path: 'method',
      code: 'triggered_changes',
      message: `Tau-leaping would leap past the moment at which the condition of “${triggered.id}” becomes true; use the exact method.`,
    });
  if (reactions.length > largestLeapingNetwork)
    faults.push({
      path: 'method',
      code: 'too_many_reactions',
      message: `Tau-leaping takes up to ${largestLeapingNetwork.toLocaleString('en')} reactions; use the exact method.`,
    });
  return faults;
}

function tooLarge(request: QuoteRequest, network: ResolvedNetwork, points: number): InputFault[] {
  const cells = (request.gridIntervals + 1) * network.observables.length * points;
  const ofPoints = points > 1 ? ` at ${points.toLocaleString('en')} points` : '';
  if (cells > limits.resultCells)
    return [
      {
        path: 'gridIntervals',
        code: 'too_many_cells',
        message:
          `${request.gridIntervals + 1} grid times of ${network.observables.length} observables${ofPoints} are ` +
          `${cells.toLocaleString('en')} cells; at most ${limits.resultCells.toLocaleString('en')} are kept. Use fewer grid intervals.`,
      },
    ];
  if (points * request.replicates > limits.replicatesPerJob)
    return [
      {
        path: 'replicates',
        code: 'too_many_replicates',
        message: `A job has at most ${limits.replicatesPerJob.toLocaleString('en')} replicates over all points.`,
      },
    ];
  const traceCells = cells * Math.min(request.outputs?.keptTraces ?? 0, request.replicates);
  if (traceCells > limits.resultCells)
    return [
      {
        path: 'outputs.keptTraces',
        code: 'too_many_cells',
        message: `So many whole traces are ${traceCells.toLocaleString('en')} cells; at most ${limits.resultCells.toLocaleString('en')} are kept. Keep fewer.`,
      },
    ];
  return [];
}

/** The passages as a job pins them. */
export const passagesOf = (request: QuoteRequest): PassageInput[] =>
  (request.outputs?.passages ?? []).map((passage) =>
    'risesTo' in passage
      ? { observable: passage.observable, direction: 'rises_to', threshold: passage.risesTo }
      : { observable: passage.observable, direction: 'falls_to', threshold: passage.fallsTo },
  );

/** The precision target as a job pins it; undefined for a fixed number of replicates. */
export function stoppingOf({ stopping, horizon, gridIntervals }: QuoteRequest): PrecisionTarget | undefined {
  if (stopping?.kind !== 'precision') return undefined;
  return {
    kind: 'precision',
    observable: stopping.observable,
    gridPoint: Math.round((stopping.time / horizon) * gridIntervals),
    halfWidth: 'relative' in stopping ? { relative: stopping.relative } : { absolute: stopping.absolute },
  };
}

function unfitStopping(request: QuoteRequest, network: ResolvedNetwork): InputFault[] {
  const { stopping, horizon, gridIntervals } = request;
  const target = stoppingOf(request);
  if (stopping?.kind !== 'precision' || !target) return [];
  const faults: InputFault[] = [];
  if (!network.observables.some(({ id }) => id === target.observable))
    faults.push({
      path: 'stopping.observable',
      code: 'unknown_observable',
      message: `“${target.observable}” is no species or observable of this model.`,
    });
  const time = (target.gridPoint * horizon) / gridIntervals;
  if (target.gridPoint > gridIntervals || Math.abs(time - stopping.time) > 1e-9 * horizon)
    faults.push({
      path: 'stopping.time',
      code: 'no_grid_time',
      message: `Give a grid time from 0 to ${horizon}; the nearest is ${Math.min(time, horizon)}.`,
    });
  return faults;
}

function unknownPassages(request: QuoteRequest, network: ResolvedNetwork): InputFault[] {
  const known = new Set(network.observables.map(({ id }) => id));
  return passagesOf(request).flatMap(({ observable }, index) =>
    known.has(observable)
      ? []
      : [
          {
            path: `outputs.passages[${index}].observable`,
            code: 'unknown_observable',
            message: `“${observable}” is no species or observable of this model.`,
          },
        ],
  );
}

/** Unknown, repeated or real-valued observables, and more pairs than are kept. */
function unfitCorrelations(request: QuoteRequest, network: ResolvedNetwork, points: number): InputFault[] {
  const chosen = request.outputs?.correlations;
  if (!chosen) return [];
  const places = prepareNetwork(network).observablePlaces;
  const faults = chosen.flatMap((id, index): InputFault[] => {
    const path = `outputs.correlations[${index}]`;
    const observable = network.observables.findIndex((known) => known.id === id);
    if (observable < 0)
      return [{ path, code: 'unknown_observable', message: `“${id}” is no species or observable of this model.` }];
    if (places[observable]!.kind !== 'count')
      return [{ path, code: 'no_count', message: `“${id}” is no whole count; covariances are noted of counts.` }];
    if (chosen.indexOf(id) !== index) return [{ path, code: 'repeated', message: `“${id}” stands there twice.` }];
    return [];
  });
  const cells = ((chosen.length * (chosen.length - 1)) / 2) * (request.gridIntervals + 1) * points;
  if (cells <= limits.correlationCells) return faults;
  const message =
    `The pairs at all grid times are ${cells.toLocaleString('en')} covariances; at most ` +
    `${limits.correlationCells.toLocaleString('en')} are kept. Choose fewer observables or grid intervals.`;
  return [...faults, { path: 'outputs.correlations', code: 'too_many_cells', message }];
}

/** Traces kept at each point when the request does not say: 20, or fewer where the grid is large. */
export function defaultKeptTraces(request: QuoteRequest, network: ResolvedNetwork, points: number): number {
  const cells = (request.gridIntervals + 1) * network.observables.length * points;
  return Math.max(0, Math.min(20, Math.floor(limits.resultCells / cells)));
}
