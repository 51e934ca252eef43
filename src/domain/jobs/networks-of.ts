/** The network at each point of a job. */
import type { NetworkDocument, Problem } from '../network/document.ts';
import type { ResolvedNetwork } from '../network/resolved.ts';
import { resolveNetwork } from '../network/resolve-network.ts';
import type { JobInputs } from './job-inputs.ts';
import { overridesAt, pointsOf } from './sweep.ts';

export type PointNetworks =
  { ok: true; networks: ResolvedNetwork[] } | { ok: false; point: number; problems: Problem[] };

/** Stops at the first point that cannot run. */
export function networksOf(document: NetworkDocument, inputs: Pick<JobInputs, 'overrides' | 'sweep'>): PointNetworks {
  const networks: ResolvedNetwork[] = [];
  for (let point = 0; point < pointsOf(inputs); point++) {
    const resolved = resolveNetwork(document, overridesAt(inputs, point));
    if (!resolved.ok) return { ok: false, point, problems: resolved.problems };
    networks.push(resolved.network);
  }
  return { ok: true, networks };
}
