/** Chooses the point of a sweep that the figures are about. */
import { SelectField } from '@/components/ui/Field.tsx';
import { pointWords, type Sweep } from '@/domain/jobs/sweep.ts';

export function PointSelect(props: { sweep: Sweep; point: number; onPoint: (point: number) => void }) {
  const { sweep, point, onPoint } = props;
  return (
    <SelectField
      label="Point of the sweep"
      fieldClassName="mb-3 max-w-md"
      value={String(point)}
      choices={sweep.values.map((_, each) => ({ value: String(each), label: `${each}: ${pointWords(sweep, each)}` }))}
      onChange={(event) => onPoint(Number(event.target.value))}
    />
  );
}
