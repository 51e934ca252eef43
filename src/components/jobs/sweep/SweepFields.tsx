/** The sweep builder: what varies and how, and the points that it makes, before anything is paid. */
import { Trash2 } from 'lucide-react';
import { Button } from '@/components/ui/Button.tsx';
import { SelectField, TextAreaField, TextField } from '@/components/ui/Field.tsx';
import { countText } from '@/components/ui/amounts-text.ts';
import { targetName, type Sweep } from '@/domain/jobs/sweep.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { FieldFaults } from '../launch-settings.ts';
import { firstAxis, targetsOf, type AxisSettings, type SweepSettings } from './sweep-settings.ts';

const kinds = {
  none: 'No sweep: one point',
  grid: 'Grid: every combination',
  latin_hypercube: 'Latin hypercube: points spread over ranges',
  list: 'List of points',
} as const;
const spacings = { values: 'Values', linear: 'Equal steps', log: 'Equal ratios' } as const;
const axesMost = 10;
const pointsShown = 200;

interface Props {
  network: NetworkDocument;
  settings: SweepSettings;
  /** The points, once the fields are in order. */
  sweep: Sweep | undefined;
  replicates: number;
  faults: FieldFaults;
  onChange: (settings: SweepSettings) => void;
}

export function SweepFields({ network, settings, sweep, replicates, faults, onChange }: Props) {
  const choices = targetsOf(network);
  const change = (next: Partial<SweepSettings>): void => onChange({ ...settings, ...next });
  const free = choices.find(({ name }) => !settings.axes.some(({ target }) => target === name));
  const setAxis = (at: number, next: Partial<AxisSettings>): void =>
    change({ axes: settings.axes.map((axis, place) => (place === at ? { ...axis, ...next } : axis)) });
  const hasAxes = settings.kind === 'grid' || settings.kind === 'latin_hypercube';
  return (
    <section aria-labelledby="sweep-title" className="border-t border-rule pt-4">
      <h2 id="sweep-title" className="mb-3 text-lg font-semibold">
        Sweep
      </h2>
      <div className="mb-3 grid gap-4 sm:grid-cols-2">
        <SelectField
          id="sweep-kind"
          label="Points"
          value={settings.kind}
          error={faults['sweep']}
          choices={Object.entries(kinds).map(([value, label]) => ({ value, label }))}
          onChange={(event) => {
            const kind = event.target.value as SweepSettings['kind'];
            const begins = settings.axes.length === 0 && (kind === 'grid' || kind === 'latin_hypercube') && choices[0];
            change({ kind, ...(begins ? { axes: [firstAxis(choices[0]!.name)] } : {}) });
          }}
        />
        {settings.kind === 'latin_hypercube' && (
          <div className="grid grid-cols-2 gap-4">
            <TextField
              id="sweep-count"
              label="Number of points"
              inputMode="numeric"
              autoComplete="off"
              value={settings.count}
              error={faults['sweep.count']}
              onChange={(event) => change({ count: event.target.value })}
            />
            <TextField
              id="sweep-seed"
              label="Seed of the points"
              inputMode="numeric"
              autoComplete="off"
              value={settings.seed}
              error={faults['sweep.seed']}
              onChange={(event) => change({ seed: event.target.value })}
            />
          </div>
        )}
      </div>
      {settings.kind === 'list' && (
        <TextAreaField
          id="sweep-list"
          label="Points, one a line"
          rows={6}
          value={settings.list}
          error={faults['sweep.list']}
          hint={`First a line of names, such as ${choices
            .slice(0, 2)
            .map(({ name }) => name)
            .join(', ')}; then numbers. A table can be pasted from a spreadsheet.`}
          onChange={(event) => change({ list: event.target.value })}
        />
      )}
      {hasAxes &&
        settings.axes.map((axis, place) => (
          <Axis
            key={place}
            {...{ axis, place, faults }}
            ranged={settings.kind === 'latin_hypercube'}
            choices={choices.map(({ name, label }) => ({ value: name, label }))}
            onChange={(next) => setAxis(place, next)}
            onRemove={() => change({ axes: settings.axes.filter((_, at) => at !== place) })}
          />
        ))}
      {hasAxes && settings.axes.length < axesMost && free && (
        <Button size="small" onClick={() => change({ axes: [...settings.axes, firstAxis(free.name)] })}>
          Vary one more quantity
        </Button>
      )}
      {sweep && <Points sweep={sweep} replicates={replicates} />}
    </section>
  );
}

function Axis(props: {
  axis: AxisSettings;
  place: number;
  ranged: boolean;
  choices: { value: string; label: string }[];
  faults: FieldFaults;
  onChange: (next: Partial<AxisSettings>) => void;
  onRemove: () => void;
}) {
  const { axis, place, ranged, choices, faults, onChange, onRemove } = props;
  const field = (name: 'from' | 'to' | 'count', label: string) => (
    <TextField
      id={`sweep-${name}-${place}`}
      label={label}
      inputMode="decimal"
      autoComplete="off"
      value={axis[name]}
      error={faults[`sweep.axes[${place}].${name}`]}
      onChange={(event) => onChange({ [name]: event.target.value })}
    />
  );
  const spacing = ranged && axis.spacing === 'values' ? 'linear' : axis.spacing;
  return (
    <fieldset className="mb-3 grid grid-cols-2 items-start gap-3 sm:grid-cols-[minmax(0,1.3fr)_minmax(0,1fr)_minmax(0,2fr)_auto]">
      <legend className="sr-only">Quantity {place + 1}</legend>
      <SelectField
        id={`sweep-target-${place}`}
        label="Vary"
        value={axis.target}
        error={faults[`sweep.axes[${place}].target`]}
        choices={choices}
        onChange={(event) => onChange({ target: event.target.value })}
      />
      <SelectField
        id={`sweep-spacing-${place}`}
        label="By"
        value={spacing}
        choices={Object.entries(spacings)
          .filter(([value]) => !ranged || value !== 'values')
          .map(([value, label]) => ({ value, label }))}
        onChange={(event) => onChange({ spacing: event.target.value as AxisSettings['spacing'] })}
      />
      <div className="col-span-2 sm:col-span-1">
        {spacing === 'values' ? (
          <TextField
            id={`sweep-values-${place}`}
            label="Values"
            autoComplete="off"
            placeholder="0.1, 0.2, 0.5"
            value={axis.values}
            error={faults[`sweep.axes[${place}].values`]}
            onChange={(event) => onChange({ values: event.target.value })}
          />
        ) : (
          <div className={`grid gap-3 ${ranged ? 'grid-cols-2' : 'grid-cols-3'}`}>
            {field('from', 'From')}
            {field('to', 'To')}
            {!ranged && field('count', 'Values')}
          </div>
        )}
      </div>
      <Button variant="quiet" className="mt-6" aria-label={`Stop varying quantity ${place + 1}`} onClick={onRemove}>
        <Trash2 aria-hidden="true" className="h-4 w-4" />
      </Button>
    </fieldset>
  );
}

function Points({ sweep, replicates }: { sweep: Sweep; replicates: number }) {
  const points = sweep.values.length;
  const shown = sweep.values.slice(0, pointsShown);
  return (
    <details className="mt-3">
      <summary className="cursor-pointer text-sm font-medium">
        {countText(points)} {points === 1 ? 'point' : 'points'}
        {Number.isInteger(replicates) && replicates > 0 && (
          <span className="font-normal text-soft">
            {' '}
            × {countText(replicates)} replicates = {countText(points * replicates)} replicates
          </span>
        )}
      </summary>
      <div className="mt-2 max-h-64 overflow-auto" tabIndex={0} role="region" aria-label="Points of the sweep">
        <table className="text-sm [&_td]:px-3 [&_th]:px-3">
          <thead>
            <tr>
              <th scope="col">Point</th>
              {sweep.targets.map((target) => (
                <th key={targetName(target)} scope="col" className="text-right">
                  {targetName(target)}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {shown.map((row, point) => (
              <tr key={point}>
                <th scope="row">{point}</th>
                {row.map((value, place) => (
                  <td key={place} className="text-right tabular-nums">
                    {Number(value.toPrecision(6))}
                  </td>
                ))}
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {points > shown.length && <p className="text-sm text-soft">The first {shown.length} of them.</p>}
    </details>
  );
}
