/** Checks what a contract cannot: a quote request against the model version, the limits and what is built so far. */
import type { z } from 'zod';
import type { quoteRequest } from '@/contracts/jobs.ts';
import type { PassageInput } from '@/domain/jobs/job-inputs.ts';
import type { PrecisionTarget } from '@/domain/jobs/precision.ts';
import { largestLeapingNetwork } from '@/engine/leaping/tau-leaping.ts';
import { limits } from '@/domain/limits.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { accept, refuse, type InputFault, type Result } from '@/domain/refusals.ts';

export type QuoteRequest = z.output<typeof quoteRequest>;

/** The network with the request's overrides, or every fault found. */
export function checkQuoteRequest(request: QuoteRequest, document: NetworkDocument): Result<ResolvedNetwork> {
  const resolved = resolveNetwork(document, request.overrides ?? {});
  if (!resolved.ok) {
    const ofOverrides = resolved.problems.filter(({ path }) => path.startsWith('overrides.'));
    return ofOverrides.length > 0
      ? refuse('invalid_input', 'Some overrides do not fit the model.', { errors: ofOverrides.map(fault) })
      : refuse('invalid_network', 'This version of the model cannot run.', { errors: resolved.problems.map(fault) });
  }
  const faults = [
    ...unknownPassages(request, resolved.network),
    ...unfitStopping(request, resolved.network),
    ...unfitMethod(request, resolved.network),
    ...notBuilt(request),
    ...tooLarge(request, resolved.network),
  ];
  return faults.length > 0
    ? refuse('invalid_input', faults.map(({ message }) => message).join(' '), { errors: faults })
    : accept(resolved.network);
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

function notBuilt({ sweep }: QuoteRequest): InputFault[] {
  const faults: InputFault[] = [];
  if (sweep !== undefined)
    faults.push({ path: 'sweep', code: 'not_available', message: 'Sweeps are not available yet; quote each point.' });
  return faults;
}

function tooLarge(request: QuoteRequest, network: ResolvedNetwork): InputFault[] {
  const cells = (request.gridIntervals + 1) * network.observables.length;
  if (cells > limits.resultCells)
    return [
      {
        path: 'gridIntervals',
        code: 'too_many_cells',
        message:
          `${request.gridIntervals + 1} grid times of ${network.observables.length} observables are ` +
          `${cells.toLocaleString('en')} cells; at most ${limits.resultCells.toLocaleString('en')} are kept. Use fewer grid intervals.`,
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

/** Traces kept when the request does not say: 20, or fewer where the grid is large. */
export function defaultKeptTraces(request: QuoteRequest, network: ResolvedNetwork): number {
  const cells = (request.gridIntervals + 1) * network.observables.length;
  return Math.max(0, Math.min(20, Math.floor(limits.resultCells / cells)));
}
