/** The preview of the draft on screen: the worker always runs the latest draft, and never two at once. */
import { useEffect, useRef, useState } from 'react';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { MeanFieldCurves, PreviewAnswer, PreviewEnd, PreviewTask, PreviewTraces } from './preview-protocol.ts';

/** Milliseconds of quiet before a draft is run. */
const runAfterMs = 40;
/** A run that takes longer is given up, and its worker with it. */
const giveUpAfterMs = 4_000;

export interface PreviewState {
  preview: PreviewTraces | null;
  meanField: MeanFieldCurves | null;
  /** Why the draft as it is now is not drawn. */
  reason: string | null;
}

const nothing: PreviewState = { preview: null, meanField: null, reason: null };

export function usePreview(network: NetworkDocument, horizon: number | null, wished: boolean): PreviewState {
  const [state, setState] = useState(nothing);
  const line = useRef<PreviewLine | null>(null);
  useEffect(() => {
    if (!wished) return;
    line.current = new PreviewLine((answer) => setState((known) => next(known, answer)));
    return () => {
      line.current?.close();
      line.current = null;
    };
  }, [wished]);
  useEffect(() => {
    if (!wished) return;
    const timer = setTimeout(() => line.current?.ask(network, horizon), runAfterMs);
    return () => clearTimeout(timer);
  }, [network, horizon, wished]);
  return state;
}

function next(known: PreviewState, answer: PreviewAnswer): PreviewState {
  if (answer.kind === 'traces') return { preview: answer.preview, meanField: null, reason: null };
  if (answer.kind === 'meanField') return { ...known, meanField: answer.curves };
  return { ...known, reason: answer.reason };
}

/** One worker, one task under way, and at most the newest one waiting. */
class PreviewLine {
  #worker: Worker | null = null;
  #turn = 0;
  #waiting: PreviewTask | null = null;
  #busy: ReturnType<typeof setTimeout> | null = null;

  constructor(readonly tell: (answer: PreviewAnswer) => void) {}

  ask(network: NetworkDocument, horizon: number | null): void {
    this.#waiting = { turn: ++this.#turn, network, horizon };
    if (this.#busy === null) this.#begin();
  }

  #begin(): void {
    const task = this.#waiting;
    if (task === null) return;
    this.#waiting = null;
    this.#worker ??= this.#open();
    this.#worker.postMessage(task);
    this.#busy = setTimeout(() => {
      this.close();
      this.tell({ turn: task.turn, kind: 'none', waits: false, reason: 'This model is too large for a live preview.' });
      this.#begin();
    }, giveUpAfterMs);
  }

  #open(): Worker {
    const worker = new Worker(new URL('./preview.worker.ts', import.meta.url), { type: 'module' });
    worker.onmessage = ({ data }: MessageEvent<PreviewAnswer | PreviewEnd>) => {
      if (data.kind === 'end') {
        this.#rest();
        this.#begin();
      } else if (this.#waiting === null && data.turn === this.#turn) this.tell(data);
    };
    worker.onerror = () => {
      this.close();
      this.tell({ turn: this.#turn, kind: 'none', waits: false, reason: 'The preview could not run in this browser.' });
    };
    return worker;
  }

  #rest(): void {
    if (this.#busy !== null) clearTimeout(this.#busy);
    this.#busy = null;
  }

  close(): void {
    this.#rest();
    this.#worker?.terminate();
    this.#worker = null;
  }
}
