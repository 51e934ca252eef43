/** Chooses the observable that the figures show. */
import { SelectField } from '@/components/ui/Field.tsx';
import type { NamedObservable } from './results-data.ts';

export const observableLabel = ({ id, name }: Pick<NamedObservable, 'id' | 'name'>): string =>
  name ? `${name} (${id})` : id;

/** The value that means every observable at once, where that is offered. */
export const allObservables = '*';

export function ObservableSelect(props: {
  observables: readonly NamedObservable[];
  value: string;
  withAll?: boolean;
  onChange: (id: string) => void;
}) {
  const { observables, value, withAll = false, onChange } = props;
  return (
    <SelectField
      label="Observable"
      fieldClassName="min-w-[11rem] max-w-full"
      value={value}
      choices={[
        ...observables.map((observable) => ({ value: observable.id, label: observableLabel(observable) })),
        ...(withAll && observables.length > 1 ? [{ value: allObservables, label: 'All means together' }] : []),
      ]}
      onChange={(event) => onChange(event.target.value)}
    />
  );
}
