/** Previews: what is drawn, what is said instead, and that nothing runs away. */
import { describe, expect, it } from 'vitest';
import { demoModels } from '@db/seeds/demo-models.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { previewHorizon, roundTime } from '@/engine/preview-horizon.ts';
import type { PreviewAnswer } from './preview-protocol.ts';
import { previewReplicates, runPreview } from './run-preview.ts';

async function answersTo(network: NetworkDocument, horizon: number | null = null): Promise<PreviewAnswer[]> {
  const answers: PreviewAnswer[] = [];
  for await (const answer of runPreview({ turn: 7, network, horizon })) answers.push(answer);
  return answers;
}

const massAction = (equation: string, constant: string, id = 'r') => ({
  id,
  equation,
  rateLaw: { kind: 'massAction' as const, constant },
});
const decay: NetworkDocument = {
  species: [{ id: 'X', initialCount: 100 }],
  reactions: [massAction('X -> ∅', '0.5')],
};

describe('runPreview', () => {
  it.each(demoModels.map(({ name, network }) => [name, network] as const))(
    'draws traces and the rate equation of %s',
    async (_, network) => {
      const [traces, curves] = await answersTo(network);
      if (traces?.kind !== 'traces') throw new Error('no traces');
      expect(traces.preview.traces).toHaveLength(previewReplicates);
      expect(traces.preview.traces.some((values) => new Set(values).size > 5)).toBe(true);
      expect(curves?.kind).toBe('meanField');
    },
  );

  it('gives the same traces for the same draft', async () => {
    const [first] = await answersTo(decay, 4);
    const [second] = await answersTo(decay, 4);
    const tracesOf = (answer?: PreviewAnswer) => (answer?.kind === 'traces' ? answer.preview.traces : null);
    expect(tracesOf(first)).not.toBeNull();
    expect(tracesOf(second)).toEqual(tracesOf(first));
  });

  it('waits for a model without errors', async () => {
    const broken = { ...decay, reactions: [massAction('X -> Y', '0.5')] };
    expect(await answersTo(broken)).toMatchObject([{ kind: 'none', waits: true }]);
    expect(await answersTo({ species: [], reactions: [] })).toMatchObject([{ kind: 'none', waits: true }]);
  });

  it('stops a model that grows without bound at its event budget, and says so', async () => {
    const growing = { species: [{ id: 'X', initialCount: 1000 }], reactions: [massAction('X -> 2 X', '1')] };
    const [answer] = await answersTo(growing, 1000);
    expect(answer).toMatchObject({ kind: 'none', waits: false });
    expect((answer as { reason: string }).reason).toContain('2,000,000 events');
  });

  it('names the failure of the model', async () => {
    const negative = {
      species: [{ id: 'X', initialCount: 3 }],
      reactions: [{ id: 'r', equation: 'X -> ∅', rateLaw: { kind: 'expression' as const, expression: '2 - X' } }],
    };
    expect(await answersTo(negative, 10)).toMatchObject([
      { kind: 'none', reason: expect.stringContaining('the propensity of r became negative') },
    ]);
  });
});

describe('previewHorizon', () => {
  const horizonOf = async (network: NetworkDocument): Promise<number | null> => {
    const resolved = resolveNetwork(network);
    if (!resolved.ok) throw new Error('not a network');
    return previewHorizon(resolved.network);
  };

  it('reaches a little beyond the fading of a decay: 95 of 100 molecules are gone near ln(20) / 0.5 = 6', async () => {
    expect(await horizonOf(decay)).toBeOneOf([5, 10]);
  });

  it('gives steady systems some thousand firings: 1,000 at 10 in and 10 out per unit of time take about 50', async () => {
    const steady = {
      species: [{ id: 'X', initialCount: 100 }],
      reactions: [massAction('∅ -> X', '10', 'in'), massAction('X -> ∅', '0.1', 'out')],
    };
    expect(await horizonOf(steady)).toBe(50);
  });

  it('answers null where nothing ever fires', async () => {
    expect(await horizonOf({ ...decay, species: [{ id: 'X', initialCount: 0 }] })).toBeNull();
  });

  it('rounds to 1, 2 or 5 by ratio', () => {
    expect([0.0132, 0.016, 3.1, 3.3, 7.2, 96].map(roundTime)).toEqual([0.01, 0.02, 2, 5, 10, 100]);
  });
});
