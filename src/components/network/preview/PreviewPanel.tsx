/** Traces of the draft while it is written: free, run in this browser, and no result. */
import { useMemo, useState } from 'react';
import { countText, numberText } from '@/charts/number-text.ts';
import { previewOption, previewTable } from '@/charts/preview-option.ts';
import { observableTitle } from '@/charts/time-course-option.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import type { FigureContent } from '@/components/charts/figure.ts';
import { SelectField, TextField } from '@/components/ui/Field.tsx';
import type { Draft } from '../draft.ts';
import { numberOf, writtenDocument } from '../written-document.ts';
import type { MeanFieldCurves, PreviewTraces } from './preview-protocol.ts';
import { usePreview, type PreviewState } from './use-preview.ts';

export function PreviewPanel({ draft }: { draft: Draft }) {
  const [open, setOpen] = useState(true);
  const [horizonText, setHorizonText] = useState('');
  const [observableId, setObservableId] = useState<string | null>(null);
  const network = useMemo(() => writtenDocument(draft).document, [draft]);
  const typed = numberOf(horizonText);
  const horizonFault = horizonText.trim() !== '' && !(typed > 0 && typed <= 1e250);
  const horizon = horizonText.trim() === '' || horizonFault ? null : typed;
  const state = usePreview(network, horizon, open);
  const { preview, meanField } = state;
  const observables = preview?.observables ?? [];
  const chosen = observables.find(({ id }) => id === observableId) ?? firstVarying(preview);
  return (
    <section aria-labelledby="preview-title">
      <h2 id="preview-title" className="text-sm font-semibold">
        <button type="button" aria-expanded={open} onClick={() => setOpen(!open)} className="min-h-9">
          Preview <span className="font-normal text-soft">{open ? '– hide' : '– show'}</span>
        </button>
      </h2>
      {open && (
        <>
          <div className="mb-2 grid grid-cols-2 gap-3">
            {chosen && (
              <SelectField
                label="Observable"
                value={chosen.id}
                choices={observables.map((one) => ({ value: one.id, label: observableTitle(one) }))}
                onChange={(event) => setObservableId(event.target.value)}
              />
            )}
            <TextField
              id="preview-horizon"
              label="Until time"
              unit={draft.timeUnit.slice(0, 8)}
              inputMode="decimal"
              autoComplete="off"
              value={horizonText}
              placeholder={preview ? numberText(preview.horizon, 4) : ''}
              error={horizonFault ? 'A number above 0.' : undefined}
              onChange={(event) => setHorizonText(event.target.value)}
            />
          </div>
          {preview && chosen && <Figure {...figureOf(preview, chosen, meanField, draft.timeUnit)} compact />}
          <p className="mt-1 text-xs text-soft" aria-live="polite">
            {wordsOf(state)}
          </p>
        </>
      )}
    </section>
  );
}

function wordsOf({ preview, reason }: PreviewState): string {
  if (preview === null) return reason ?? 'Running a few replicates …';
  if (reason !== null) return `As the model was before the last change. ${reason}`;
  if (preview.traces.length < preview.replicatesAsked)
    return `${preview.traces.length} of ${preview.replicatesAsked} replicates fit into a preview’s event budget.`;
  return 'Free, run in this browser, not kept. Too few replicates to conclude from.';
}

/** The first observable that varies. */
function firstVarying(preview: PreviewTraces | null): PreviewTraces['observables'][number] | undefined {
  if (preview === null) return undefined;
  const points = preview.times.length;
  const varies = (observable: number): boolean =>
    preview.traces.some((values) => {
      const row = values.subarray(observable * points, (observable + 1) * points);
      return row.some((value) => value !== row[0]);
    });
  return preview.observables.find((_, observable) => varies(observable)) ?? preview.observables[0];
}

function figureOf(
  preview: PreviewTraces,
  chosen: PreviewTraces['observables'][number],
  meanField: MeanFieldCurves | null,
  timeUnit: string,
): FigureContent {
  const points = preview.times.length;
  const at = preview.observables.findIndex(({ id }) => id === chosen.id);
  const figure = {
    title: observableTitle(chosen),
    times: preview.times,
    timeUnit,
    traces: preview.traces.map((values) => values.subarray(at * points, (at + 1) * points)),
    meanField: meanField?.observables.find(({ id }) => id === chosen.id)?.values ?? null,
  };
  return {
    description: `Preview: ${figure.title} in ${countText(figure.traces.length)} replicates${figure.meanField ? ', rate equation dashed' : ''}.`,
    option: (theme) => previewOption(figure, theme),
    table: () => previewTable(figure),
    fileStem: `preview-${chosen.id}`,
  };
}
