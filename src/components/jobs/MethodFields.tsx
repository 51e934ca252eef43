/** Exact or leaped, and how far a leap may go. */
import { RadioField, TextField } from '@/components/ui/Field.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import type { FieldFaults, LaunchSettings } from './launch-settings.ts';

export function MethodFields(props: {
  settings: Pick<LaunchSettings, 'method' | 'epsilon'>;
  faults: FieldFaults;
  change: (next: Partial<LaunchSettings>) => void;
}) {
  const { settings, faults, change } = props;
  return (
    <section aria-label="Method">
      <RadioField
        legend="Method"
        name="method"
        value={settings.method}
        choices={[
          { value: 'exact', label: 'Exact', hint: 'every firing, nothing approximated' },
          { value: 'leap', label: 'Tau-leaping', hint: 'approximate; many firings a step, for large counts' },
        ]}
        onChange={(method) => change({ method: method as LaunchSettings['method'] })}
      />
      {settings.method === 'leap' && (
        <TextField
          id="epsilon"
          label="ε of a leap"
          fieldClassName="mt-3 max-w-sm"
          inputMode="decimal"
          autoComplete="off"
          value={settings.epsilon}
          error={faults['epsilon']}
          hint="By how much of itself a propensity may change in one leap, up to 0.5. Smaller is nearer to exact, and dearer."
          onChange={(event) => change({ epsilon: event.target.value })}
        />
      )}
      {faults['method'] && (
        <Notice tone="failure" className="mt-3" title="This model does not leap">
          {faults['method']}
        </Notice>
      )}
    </section>
  );
}
