/** Runs previews beside the page, so that typing stays quick. */
import type { PreviewAnswer, PreviewEnd, PreviewTask } from './preview-protocol.ts';
import { runPreview } from './run-preview.ts';

// In a worker the second argument of the page's postMessage does not exist; the types know only the page's.
const answer = self.postMessage as (message: PreviewAnswer | PreviewEnd) => void;

self.onmessage = async ({ data }: MessageEvent<PreviewTask>): Promise<void> => {
  try {
    for await (const part of runPreview(data)) answer(part);
  } catch (error) {
    const reason = error instanceof Error ? error.message : 'The preview could not run in this browser.';
    answer({ turn: data.turn, kind: 'none', waits: false, reason });
  }
  answer({ turn: data.turn, kind: 'end' });
};
