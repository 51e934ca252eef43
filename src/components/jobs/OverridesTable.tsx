/** Values for this job in place of the model's own: parameters, initial counts, times of changes. */
import { useState } from 'react';
import { TextField } from '@/components/ui/Field.tsx';
import { Button } from '@/components/ui/Button.tsx';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { FieldFaults, LaunchSettings } from './launch-settings.ts';

interface Props {
  network: NetworkDocument;
  settings: LaunchSettings;
  faults: FieldFaults;
  change: (change: Partial<LaunchSettings>) => void;
}

interface Overridable {
  id: string;
  title: string;
  value: string;
  unit?: string | undefined;
}

/** More rows than this come with a field to find one. */
const rowsWithoutSearch = 15;
const rowsShown = 100;

function parametersOf({ parameters, compartments, reactions, assignmentRules }: NetworkDocument): Overridable[] {
  const assigned = new Set((assignmentRules ?? []).map(({ variable }) => variable));
  return [
    ...(parameters ?? [])
      .filter(({ id }) => !assigned.has(id))
      .map(({ id, name, value, unit }) => ({ id, title: name ?? '', value: String(value), unit })),
    ...(compartments ?? [])
      .filter(({ size }) => size !== null)
      .map(({ id, size, unit }) => ({ id, title: 'size of the compartment', value: String(size), unit })),
    ...reactions.flatMap(({ id: reaction, localParameters }) =>
      (localParameters ?? []).map(({ id, name, value, unit }) => ({
        id: `${reaction}.${id}`,
        title: name ?? '',
        value: String(value),
        unit,
      })),
    ),
  ];
}

function countsOf({ species, assignmentRules }: NetworkDocument): Overridable[] {
  const assigned = new Set((assignmentRules ?? []).map(({ variable }) => variable));
  return species
    .filter(({ id }) => !assigned.has(id))
    .map(({ id, name, initialCount }) => ({ id, title: name ?? '', value: String(initialCount), unit: 'at time 0' }));
}

const timesOf = ({ changes, timeUnit }: NetworkDocument): Overridable[] =>
  (changes ?? []).flatMap(({ id, name, when }) =>
    when.kind === 'time' ? [{ id, title: name ?? 'first happens', value: when.time, unit: timeUnit }] : [],
  );

export function OverridesTable({ network, settings, faults, change }: Props) {
  const filled = (cells: Record<string, string>): number =>
    Object.values(cells).filter((text) => text.trim() !== '').length;
  const used = filled(settings.parameters) + filled(settings.initialCounts) + filled(settings.changeTimes);
  const timed = timesOf(network);
  const [open, setOpen] = useState(used > 0);
  return (
    <section aria-labelledby="overrides-title" className="border-t border-rule pt-4">
      <div className="flex flex-wrap items-center justify-between gap-2">
        <h2 id="overrides-title" className="text-lg font-semibold">
          Changes for this job
          <span className="ml-2 text-sm font-normal text-soft">
            {used === 0 ? "the model's own values" : `${used} changed`}
          </span>
        </h2>
        <Button size="small" aria-expanded={open} onClick={() => setOpen(!open)}>
          {open ? 'Hide' : 'Change parameters, counts or times'}
        </Button>
      </div>
      {open && (
        <div className="mt-3 grid gap-x-10 gap-y-6 lg:grid-cols-2">
          <OverrideList
            title="Parameters"
            prefix="parameters"
            rows={parametersOf(network)}
            cells={settings.parameters}
            faults={faults}
            onCells={(parameters) => change({ parameters })}
          />
          <OverrideList
            title="Initial counts"
            prefix="initialCounts"
            rows={countsOf(network)}
            cells={settings.initialCounts}
            faults={faults}
            onCells={(initialCounts) => change({ initialCounts })}
          />
          {(timed.length > 0 || filled(settings.changeTimes) > 0) && (
            <OverrideList
              title="Times of changes"
              prefix="changeTimes"
              rows={timed}
              cells={settings.changeTimes}
              faults={faults}
              onCells={(changeTimes) => change({ changeTimes })}
            />
          )}
        </div>
      )}
    </section>
  );
}

function OverrideList(props: {
  title: string;
  prefix: 'parameters' | 'initialCounts' | 'changeTimes';
  rows: Overridable[];
  cells: Record<string, string>;
  faults: FieldFaults;
  onCells: (cells: Record<string, string>) => void;
}) {
  const { title, prefix, rows, cells, faults, onCells } = props;
  const [sought, setSought] = useState('');
  const words = sought.trim().toLowerCase();
  const fits = rows.filter(
    ({ id, title: name }) => words === '' || id.toLowerCase().includes(words) || name.toLowerCase().includes(words),
  );
  // Values kept from an earlier job whose names this version does not have.
  const strays = Object.keys(cells).filter((id) => !rows.some((row) => row.id === id));
  return (
    <div>
      <h3 className="mb-1 text-sm font-semibold">{title}</h3>
      {rows.length === 0 && strays.length === 0 && <p className="text-sm text-soft">The model has none.</p>}
      {rows.length > rowsWithoutSearch && (
        <TextField
          label={`Find in ${title.toLowerCase()}`}
          type="search"
          value={sought}
          onChange={(event) => setSought(event.target.value)}
          fieldClassName="mb-2"
        />
      )}
      <ul>
        {[
          ...fits.slice(0, rowsShown),
          ...strays.map((id): Overridable => ({ id, title: 'not in this version', value: '' })),
        ].map((row) => (
          <li key={row.id} className="grid grid-cols-[minmax(0,1fr)_9rem] items-start gap-3 border-b border-rule py-2">
            <span className="min-w-0 text-sm">
              <b className="font-medium [overflow-wrap:anywhere]">{row.id}</b>
              <span className="block text-soft [overflow-wrap:anywhere]">
                {row.title}
                {row.title && row.value && ' · '}
                {row.value}
                {row.unit && ` ${row.unit}`}
              </span>
            </span>
            <TextField
              label={`${row.id}, instead of ${row.value}`}
              labelHidden
              inputMode="decimal"
              autoComplete="off"
              placeholder={row.value}
              value={cells[row.id] ?? ''}
              error={faults[`${prefix}.${row.id}`]}
              className="text-right"
              onChange={(event) => {
                const { [row.id]: _, ...others } = cells;
                onCells(event.target.value === '' ? others : { ...cells, [row.id]: event.target.value });
              }}
            />
          </li>
        ))}
      </ul>
      {fits.length > rowsShown && (
        <p className="mt-2 text-sm text-soft">{fits.length - rowsShown} more; narrow them with the field above.</p>
      )}
    </div>
  );
}
