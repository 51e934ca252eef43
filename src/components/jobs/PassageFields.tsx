/** First passages to time: when an observable first reaches a threshold; extinction is falling to 0. */
import { Trash2 } from 'lucide-react';
import { Button } from '@/components/ui/Button.tsx';
import { SelectField, TextField } from '@/components/ui/Field.tsx';
import { limits } from '@/domain/limits.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { FieldFaults, LaunchSettings, PassageSettings } from './launch-settings.ts';

export const directionWords = { rises_to: 'rises to', falls_to: 'falls to' } as const;

export function PassageFields(props: {
  network: NetworkDocument;
  passages: PassageSettings[];
  faults: FieldFaults;
  change: (next: Partial<LaunchSettings>) => void;
}) {
  const { network, passages, faults, change } = props;
  const observables = [...network.species, ...(network.observables ?? [])];
  const set = (at: number, next: Partial<PassageSettings>): void =>
    change({ passages: passages.map((passage, index) => (index === at ? { ...passage, ...next } : passage)) });
  return (
    <section aria-labelledby="passages-title" className="border-t border-rule pt-4">
      <h2 id="passages-title" className="text-lg font-semibold">
        First passages
      </h2>
      <p className="mb-3 text-sm text-soft">
        When an observable first reaches a threshold, in every replicate; extinction is falling to 0.
      </p>
      {passages.map((passage, index) => (
        <div
          key={index}
          className="mb-3 grid grid-cols-[minmax(0,1fr)_auto] items-end gap-3 sm:grid-cols-[minmax(0,1fr)_9rem_9rem_auto]"
        >
          <SelectField
            id={`passage-observable-${index}`}
            label="Observable"
            value={passage.observable}
            error={faults[`passages[${index}].observable`]}
            choices={observables.map(({ id, name }) => ({ value: id, label: name ? `${name} (${id})` : id }))}
            onChange={(event) => set(index, { observable: event.target.value })}
          />
          <SelectField
            id={`passage-direction-${index}`}
            label="Passes when it"
            value={passage.direction}
            choices={Object.entries(directionWords).map(([value, label]) => ({ value, label }))}
            onChange={(event) => set(index, { direction: event.target.value as PassageSettings['direction'] })}
          />
          <TextField
            id={`passage-threshold-${index}`}
            label="Threshold"
            inputMode="decimal"
            autoComplete="off"
            value={passage.threshold}
            error={faults[`passages[${index}].threshold`]}
            onChange={(event) => set(index, { threshold: event.target.value })}
          />
          <Button
            variant="quiet"
            aria-label={`Remove first passage ${index + 1}`}
            onClick={() => change({ passages: passages.filter((_, at) => at !== index) })}
          >
            <Trash2 aria-hidden="true" className="h-4 w-4" />
          </Button>
        </div>
      ))}
      {passages.length < limits.passagesPerJob && (
        <Button
          size="small"
          onClick={() =>
            change({
              passages: [...passages, { observable: observables[0]?.id ?? '', direction: 'falls_to', threshold: '0' }],
            })
          }
        >
          Add a first passage
        </Button>
      )}
    </section>
  );
}
