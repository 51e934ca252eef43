/** The model editor: grids for every part of a network, checks beside them, a draft that survives, versions. */
import { Redo2, Undo2 } from 'lucide-react';
import { useMemo, useState, type KeyboardEvent } from 'react';
import { Button } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { momentText } from '@/components/ui/amounts-text.ts';
import { Notice } from '@/components/ui/Notice.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { footKey } from './change-draft.ts';
import { ChecksPanel } from './ChecksPanel.tsx';
import { draftOf, emptyDraft, type GridName } from './draft.ts';
import { Grid } from './Grid.tsx';
import { compartmentColumns, gridDescriptions } from './grid-columns.ts';
import { PreviewPanel } from './preview/PreviewPanel.tsx';
import { SavePanel } from './SavePanel.tsx';
import { useChecks, type Checks } from './use-checks.ts';
import { draftStorageKey, useDraft } from './use-draft.ts';
import { VersionsPanel, type ListedVersion } from './VersionsPanel.tsx';
import type { CellPlace } from './written-document.ts';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

export interface ModelEditorProps {
  team: string;
  timeZone: string;
  readOnly: boolean;
  /** Absent for a new model. */
  stored?: {
    id: string;
    name: string;
    /** The version shown; its network is where the draft begins. */
    number: number;
    network: NetworkDocument;
    versions: ListedVersion[];
  };
}

const always: readonly GridName[] = ['species', 'parameters', 'reactions'];
/** Shown once they hold something or were asked for. */
const onDemand: readonly GridName[] = ['compartments', 'assignmentRules', 'observables', 'changes', 'localParameters'];

export function ModelEditor(props: ModelEditorProps) {
  return (
    <QueryProvider>
      <WhenLive>
        <Editor {...props} />
      </WhenLive>
    </QueryProvider>
  );
}

function Editor({ team, timeZone, readOnly, stored }: ModelEditorProps) {
  const initial = useMemo(() => (stored ? draftOf(stored.name, stored.network) : emptyDraft()), [stored]);
  const latest = stored?.versions[0]?.number ?? null;
  // An older version opened again has a draft of its own, so that it never hides the one on the latest.
  const older = stored !== undefined && stored.number !== latest ? stored.number : null;
  const state = useDraft(draftStorageKey(team, stored?.id ?? null, older), initial, readOnly);
  const { draft, change, changed } = state;
  const { checks, pending } = useChecks(draft);
  const [goTo, setGoTo] = useState<{ place: CellPlace; turn: number } | null>(null);
  const [asked, setAsked] = useState<ReadonlySet<GridName>>(new Set());

  function goToPlace(place: CellPlace): void {
    setAsked((known) => new Set([...known, place.grid]));
    setGoTo((last) => ({ place, turn: (last?.turn ?? 0) + 1 }));
  }
  const firstError = (found: Checks): void => {
    const place = found.problems.find((problem) => problem.severity === 'error' && problem.place)?.place;
    if (place) goToPlace(place);
  };

  function onKeyDown(event: KeyboardEvent): void {
    if (!(event.ctrlKey || event.metaKey) || event.altKey || readOnly) return;
    const key = event.key.toLowerCase();
    const wish = key === 'z' ? (event.shiftKey ? 'redo' : 'undo') : key === 'y' ? 'redo' : null;
    // Fields outside the draft keep the browser's own undo.
    if (wish === null || (event.target as HTMLElement).id === 'version-note') return;
    event.preventDefault();
    change({ kind: wish });
  }

  const withCompartments = draft.grids.compartments.length > 0;
  const columnsOf = useMemo(
    () => (grid: GridName) =>
      gridDescriptions[grid].columns.filter(
        ({ id }) => grid !== 'species' || withCompartments || !compartmentColumns.has(id),
      ),
    [withCompartments],
  );
  const speciesColumns = useMemo(() => columnsOf('species'), [columnsOf]);
  const shown = [...always, ...onDemand.filter((grid) => draft.grids[grid].length > 0 || asked.has(grid))];
  const hidden = onDemand.filter((grid) => !shown.includes(grid));

  return (
    <div className="gap-10 xl:grid xl:grid-cols-[minmax(0,1fr)_19rem]" onKeyDown={onKeyDown}>
      <div className="min-w-0">
        {older !== null && (
          <Notice still className="mb-4" title={`Version ${older} is open`}>
            The latest is version {latest}. Saving stores what is shown here as version {(latest ?? 0) + 1}; nothing is
            overwritten.
          </Notice>
        )}
        {state.restoredAt !== null && (
          <Notice
            className="mb-4"
            title="Your unsaved draft is back"
            action={
              <Button size="small" onClick={state.discard}>
                {stored ? `Discard it and show version ${stored.number}` : 'Discard it and begin anew'}
              </Button>
            }
          >
            It was kept in this browser on {momentText(state.restoredAt, timeZone)}.
          </Notice>
        )}
        <div className="mb-6 flex flex-wrap items-end gap-x-4 gap-y-3">
          {!stored && (
            <TextField
              id="model-name"
              label="Name of the model"
              fieldClassName="min-w-0 grow basis-64"
              value={draft.name}
              maxLength={200}
              placeholder="Two-state switch"
              onChange={(event) => change({ kind: 'name', text: event.target.value })}
            />
          )}
          <TextField
            id="time-unit"
            label="Unit of time"
            fieldClassName="w-32"
            value={draft.timeUnit}
            maxLength={50}
            readOnly={readOnly}
            placeholder="s"
            onChange={(event) => change({ kind: 'timeUnit', text: event.target.value })}
          />
          {!readOnly && (
            <div className="flex gap-1">
              <Button size="small" variant="quiet" disabled={!state.canUndo} onClick={() => change({ kind: 'undo' })}>
                <Undo2 aria-hidden="true" className="h-4 w-4" /> Undo
              </Button>
              <Button size="small" variant="quiet" disabled={!state.canRedo} onClick={() => change({ kind: 'redo' })}>
                <Redo2 aria-hidden="true" className="h-4 w-4" /> Redo
              </Button>
            </div>
          )}
        </div>
        <div className="space-y-8">
          {shown.map((grid) => (
            <Grid
              key={grid}
              grid={grid}
              columns={grid === 'species' ? speciesColumns : gridDescriptions[grid].columns}
              rows={draft.grids[grid]}
              footKey={footKey(draft)}
              problems={checks.byCell}
              readOnly={readOnly}
              goTo={goTo}
              change={change}
            />
          ))}
        </div>
        {!readOnly && hidden.length > 0 && (
          <div className="mt-8 flex flex-wrap items-center gap-2 text-sm text-soft">
            <span>When the model needs them:</span>
            {hidden.map((grid) => (
              <Button
                key={grid}
                size="small"
                variant="quiet"
                onClick={() => setAsked((known) => new Set([...known, grid]))}
              >
                {gridDescriptions[grid].title}
              </Button>
            ))}
          </div>
        )}
        {!readOnly && <KeyboardHelp />}
      </div>
      <div className="mt-10 space-y-8 xl:sticky xl:top-6 xl:mt-0 xl:self-start xl:border-l xl:border-rule xl:pl-8">
        <ChecksPanel {...{ draft, checks, pending, readOnly, change }} onGoTo={goToPlace} />
        <PreviewPanel draft={draft} />
        {!readOnly && (
          <SavePanel
            team={team}
            model={stored && latest !== null ? { id: stored.id, latestNumber: latest } : null}
            draft={draft}
            changed={changed || older !== null}
            keeping={state.keeping}
            forget={state.forget}
            onErrors={firstError}
          />
        )}
        {stored && <VersionsPanel team={team} timeZone={timeZone} stored={stored} />}
      </div>
    </div>
  );
}

/** Shortcuts, for those who look for them. */
function KeyboardHelp() {
  const [open, setOpen] = useState(false);
  const keys: [string, string][] = [
    ['Enter, Tab, arrows', 'next cell; Enter after a row of Tabs begins the next row'],
    ['Paste', 'several cells copied from a spreadsheet go in at once'],
    ['Alt with ↑ or ↓', 'moves the row'],
    ['Ctrl or ⌘ with Z, and with Shift+Z', 'undo and redo'],
  ];
  return (
    <div className="mt-8 border-t border-rule pt-3 text-sm">
      <button type="button" className="link text-soft" aria-expanded={open} onClick={() => setOpen(!open)}>
        Keyboard
      </button>
      {open && (
        <dl className="mt-2 grid gap-x-6 gap-y-1 sm:grid-cols-[auto_1fr]">
          {keys.map(([key, words]) => (
            <div key={key} className="contents">
              <dt className="font-medium">{key}</dt>
              <dd className="text-soft">{words}</dd>
            </div>
          ))}
        </dl>
      )}
    </div>
  );
}
