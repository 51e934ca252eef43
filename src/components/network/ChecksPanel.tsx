/** What the checks say of the network: problems with the way to their cell, what can be added at a click, conserved totals. */
import { Button } from '@/components/ui/Button.tsx';
import { StateLabel, type StateTone } from '@/components/ui/StateLabel.tsx';
import type { Draft } from './draft.ts';
import type { HistoryAction } from './draft-history.ts';
import { gridDescriptions } from './grid-columns.ts';
import type { Checks, PlacedProblem } from './use-checks.ts';
import type { CellPlace } from './written-document.ts';

interface Props {
  draft: Draft;
  checks: Checks;
  pending: boolean;
  readOnly: boolean;
  change: (action: HistoryAction) => void;
  onGoTo: (place: CellPlace) => void;
}

const totals = new Set(['conserved_total', 'constant_species']);
const tones: Record<PlacedProblem['severity'], StateTone> = {
  error: 'failed',
  warning: 'caution',
  information: 'over',
};
/** A new model is empty; that is no fault to be told. */
const untold = new Set(['empty_network']);

export function ChecksPanel({ draft, checks, pending, readOnly, change, onGoTo }: Props) {
  const told = checks.problems.filter(({ code }) => !totals.has(code) && !untold.has(code));
  const conserved = checks.problems.filter(({ code }) => totals.has(code));
  return (
    <section aria-labelledby="checks-title" aria-busy={pending}>
      <h2 id="checks-title" className="text-sm font-semibold">
        Checks
      </h2>
      <p role="status" className="mt-1 text-sm text-soft">
        {summary(checks, told)}
      </p>
      {!readOnly && <MissingOffers checks={checks} change={change} />}
      {told.length > 0 && (
        <ul
          className="mt-2 max-h-[26rem] overflow-y-auto border-t border-rule text-sm"
          tabIndex={0}
          aria-label="Problems"
        >
          {told.map((problem, index) => (
            <li key={`${problem.path} ${problem.code} ${index}`} className="border-b border-rule py-2">
              <ProblemLine problem={problem} draft={draft} onGoTo={onGoTo} />
              {problem.code === 'reversible_equation' && problem.place && !readOnly && (
                <Button
                  size="small"
                  className="mt-1.5"
                  onClick={() => change({ kind: 'split', key: problem.place!.key })}
                >
                  Make it two reactions
                </Button>
              )}
            </li>
          ))}
        </ul>
      )}
      {conserved.length > 0 && (
        <>
          <h3 className="mt-5 text-sm font-semibold">Conserved totals</h3>
          <ul className="mt-1 text-sm text-soft">
            {conserved.map(({ path, message }, index) => (
              <li key={`${path} ${index}`} className="py-0.5 [overflow-wrap:anywhere]">
                {message.replace(/^Conserved: /, '')}
              </li>
            ))}
          </ul>
        </>
      )}
    </section>
  );
}

function summary({ written, errors }: Checks, told: PlacedProblem[]): string {
  const { species, reactions } = written.document;
  if (species.length === 0 && reactions.length === 0) return 'Nothing to check yet.';
  const warnings = told.filter(({ severity }) => severity === 'warning').length;
  const count = (number: number, word: string): string => `${number} ${word}${number === 1 ? '' : 's'}`;
  if (errors === 0 && warnings === 0) return 'Ready to run.';
  if (errors === 0) return `Ready to run, with ${count(warnings, 'warning')}.`;
  return `${count(errors, 'error')} to mend before it can run${warnings > 0 ? `, ${count(warnings, 'warning')}` : ''}.`;
}

function ProblemLine({ problem, draft, onGoTo }: { problem: PlacedProblem; draft: Draft; onGoTo: Props['onGoTo'] }) {
  const { place, severity, message } = problem;
  const word = severity === 'information' ? 'note' : severity;
  const row = place === null ? -1 : draft.grids[place.grid].findIndex(({ key }) => key === place.key);
  return (
    <>
      <span className="flex flex-wrap items-baseline justify-between gap-x-3">
        <StateLabel tone={tones[severity]}>{word}</StateLabel>
        {place && row >= 0 && (
          <button type="button" className="link text-ink" onClick={() => onGoTo(place)}>
            Go to {gridDescriptions[place.grid].row} {row + 1}
          </button>
        )}
      </span>
      <span className="block [overflow-wrap:anywhere]">{message}</span>
    </>
  );
}

/** Names that the equations and laws already use are offered as rows. */
function MissingOffers({ checks, change }: { checks: Checks; change: Props['change'] }) {
  const { species, parameters } = checks.missing;
  const offer = (grid: 'species' | 'parameters', names: string[]) =>
    names.length > 0 && (
      <Button size="small" onClick={() => change({ kind: 'append', grid, cells: names.map((id) => ({ id })) })}>
        Add {grid}{' '}
        {names.length <= 4 ? names.join(', ') : `${names.slice(0, 3).join(', ')} and ${names.length - 3} more`}
      </Button>
    );
  if (species.length + parameters.length === 0) return null;
  return (
    <div className="mt-2 flex flex-wrap gap-2">
      {offer('species', species)}
      {offer('parameters', parameters)}
    </div>
  );
}
