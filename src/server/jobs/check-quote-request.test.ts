/** What a quote refuses for its size, before any pilot is tried. */
import { describe, expect, it } from 'vitest';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { limits } from '@/domain/limits.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { checkQuoteRequest, type QuoteRequest } from './check-quote-request.ts';

/** X leaves by `count` reactions of the same kind. */
const leaving = (count: number): NetworkDocument => ({
  species: [{ id: 'X', initialCount: 50 }],
  parameters: [{ id: 'k', value: 0.01 }],
  reactions: Array.from({ length: count }, (_, index) => ({
    id: `leave${index}`,
    equation: 'X → ∅',
    rateLaw: { kind: 'massAction', constant: 'k' },
  })),
});
const request: QuoteRequest = {
  modelVersionId: 'version_1',
  replicates: 10,
  horizon: 1,
  gridIntervals: 2,
  method: 'exact',
  lane: 'steady',
};

describe('the number of reactions of a job', () => {
  it('is not limited further than that of a stored network', async () => {
    const checked = checkQuoteRequest(request, leaving(limits.reactionsPerNetwork));
    if (!checked.ok) throw new Error(checked.detail);
    const { replicateCount, kernel } = await runBatch(
      batchTask(checked.value.networks[0]!, { replicateCount: 4, horizon: 1e-4 }),
    );
    expect({ replicateCount, kernel }).toEqual({ replicateCount: 4, kernel: 'composition-rejection' });
  });
});
