/** Everything that can be said about a network before it runs: the same checks in the browser and on the server. */
import { adviseOnNetwork } from './advise-on-network.ts';
import type { NetworkDocument, Problem } from './document.ts';
import { orderedProblems } from './problems.ts';
import { resolveNetwork } from './resolve-network.ts';

/**
 * All problems of a document, each with the path of its cell: errors (it cannot run), or, when there are none, warnings
 * and information (it can run, and this is worth knowing). Pure; in milliseconds for ordinary networks.
 */
export function checkNetwork(document: NetworkDocument): Problem[] {
  const resolved = resolveNetwork(document);
  return resolved.ok ? orderedProblems(adviseOnNetwork(document, resolved.network)) : resolved.problems;
}
