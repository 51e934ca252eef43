/** Checks and normalises a network before it is stored: refused with every error located, else with what is worth knowing. */
import { createHash } from 'node:crypto';
import { checkNetwork } from '@/domain/network/check-network.ts';
import type { NetworkDocument, Problem } from '@/domain/network/document.ts';
import { normaliseDocument } from '@/domain/network/normalise-document.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';

/** More than anybody reads; the first ones explain the rest. */
const errorsShown = 200;

export function checkDocument(
  document: NetworkDocument,
): Result<{ document: NetworkDocument; contentHash: string; problems: Problem[] }> {
  const problems = checkNetwork(document);
  const errors = problems.filter(({ severity }) => severity === 'error');
  if (errors.length > 0)
    return refuse(
      'invalid_network',
      `The network has ${errors.length === 1 ? 'one error' : `${errors.length} errors`}; nothing was stored.`,
      {
        errors: errors
          .slice(0, errorsShown)
          .map(({ path, code, message }) => ({ path: `network.${path}`, code, message })),
      },
    );
  const normalised = normaliseDocument(document);
  const contentHash = createHash('sha256').update(JSON.stringify(normalised)).digest('hex');
  return accept({ document: normalised, contentHash, problems });
}
