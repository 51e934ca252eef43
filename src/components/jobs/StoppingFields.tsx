/** When the job ends: after its replicates, or sooner once a mean is known well enough. */
import { RadioField, SelectField, TextField } from '@/components/ui/Field.tsx';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { FieldFaults, LaunchSettings, StoppingSettings } from './launch-settings.ts';

export function StoppingFields(props: {
  network: NetworkDocument;
  stopping: StoppingSettings;
  horizon: string;
  unit: string;
  faults: FieldFaults;
  change: (next: Partial<LaunchSettings>) => void;
}) {
  const { network, stopping, horizon, unit, faults, change } = props;
  const set = (next: Partial<StoppingSettings>): void => change({ stopping: { ...stopping, ...next } });
  const observables = [...network.species, ...(network.observables ?? [])];
  return (
    <section aria-label="When the job ends">
      <RadioField
        legend="Ends"
        name="stopping"
        value={stopping.kind}
        choices={[
          { value: 'replicates', label: 'When all are complete', hint: '' },
          {
            value: 'precision',
            label: 'Sooner, once a mean is known well enough',
            hint: 'looked at after 256, 512, 1,024 … replicates',
          },
        ]}
        onChange={(kind) => set({ kind: kind as StoppingSettings['kind'] })}
      />
      {stopping.kind === 'precision' && (
        <div className="mt-3 grid gap-4 sm:grid-cols-4">
          <SelectField
            id="stopping-observable"
            label="Mean of"
            value={stopping.observable || (observables[0]?.id ?? '')}
            error={faults['stopping.observable']}
            choices={observables.map(({ id, name }) => ({ value: id, label: name ? `${name} (${id})` : id }))}
            onChange={(event) => set({ observable: event.target.value })}
          />
          <TextField
            id="stopping-time"
            label="At time"
            {...(unit ? { unit } : {})}
            inputMode="decimal"
            autoComplete="off"
            value={stopping.time}
            placeholder={horizon}
            error={faults['stopping.time']}
            onChange={(event) => set({ time: event.target.value })}
          />
          <TextField
            id="stopping-half-width"
            label="Known to ±"
            inputMode="decimal"
            autoComplete="off"
            value={stopping.halfWidth}
            error={faults['stopping.halfWidth'] ?? faults['stopping.relative'] ?? faults['stopping.absolute']}
            hint="95 % interval, nominal"
            onChange={(event) => set({ halfWidth: event.target.value })}
          />
          <SelectField
            id="stopping-measure"
            label="In"
            value={stopping.measure}
            choices={[
              { value: 'relative', label: '% of the mean' },
              { value: 'absolute', label: 'its own unit' },
            ]}
            onChange={(event) => set({ measure: event.target.value as StoppingSettings['measure'] })}
          />
        </div>
      )}
    </section>
  );
}
