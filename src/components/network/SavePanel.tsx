/** Saves the network on screen as a new model or a new version, with a note. */
import { useRef, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { Button, ButtonLink } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { createModel, readModel, saveVersion } from '@/contracts/network.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { paths } from '@/paths.ts';
import { checksOf, type Checks } from './use-checks.ts';
import type { Draft } from './draft.ts';

interface Props {
  team: string;
  /** null: the model is new. */
  model: { id: string; latestNumber: number } | null;
  draft: Draft;
  changed: boolean;
  keeping: 'kept' | 'pending' | 'refused';
  forget: () => void;
  onErrors: (checks: Checks) => void;
}

export function SavePanel({ team, model, draft, changed, keeping, forget, onErrors }: Props) {
  const [note, setNote] = useState('');
  const [saving, setSaving] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [hindrance, setHindrance] = useState<string | null>(null);
  const intent = useRef<{ body: string; key: string } | null>(null);

  /** `basedOn` is the latest version that the person knows of. */
  async function save(basedOn = model?.latestNumber ?? 0): Promise<void> {
    setProblem(null);
    const checks = checksOf(draft);
    if (model === null && draft.name.trim() === '') {
      setHindrance('Give the model a name first.');
      document.getElementById('model-name')?.focus();
      return;
    }
    if (checks.errors > 0) {
      setHindrance(
        `${checks.errors === 1 ? 'One error has' : `${checks.errors} errors have`} to be mended first. The draft is kept in this browser meanwhile.`,
      );
      onErrors(checks);
      return;
    }
    setHindrance(null);
    setSaving(true);
    const network = checks.written.document;
    const words = note.trim() === '' ? {} : { note: note.trim() };
    const body = JSON.stringify([network, words, draft.name, basedOn]);
    // The same content sent again is the same intent, so that a lost answer stores nothing twice.
    if (intent.current?.body !== body) intent.current = { body, key: intentKey() };
    const idempotencyKey = intent.current.key;
    const called =
      model === null
        ? await callApi(createModel, {
            path: { team },
            body: { name: draft.name.trim(), network, ...words },
            idempotencyKey,
          })
        : await callApi(saveVersion, {
            path: { team, model: model.id },
            body: { network, basedOn, ...words },
            idempotencyKey,
          });
    if (!called.ok) {
      setSaving(false);
      setProblem(called.problem);
      return;
    }
    forget();
    const { model: stored, version } = called.value;
    window.location.assign(`${paths.model(team, stored.id)}?saved=${version.number}`);
  }

  /** After somebody else saved: theirs stays as it is, and this becomes the version after it. */
  async function saveAfterTheirs(id: string): Promise<void> {
    const called = await callApi(readModel, { path: { team, model: id } });
    if (called.ok) await save(called.value.model.latestVersion.number);
    else setProblem(called.problem);
  }

  return (
    <section aria-labelledby="save-title">
      <h2 id="save-title" className="text-sm font-semibold">
        {model === null ? 'Save' : `Save as version ${model.latestNumber + 1}`}
      </h2>
      <p className="mt-1 text-sm text-soft" role="status">
        {keeping === 'refused'
          ? 'This browser keeps no drafts: save before you leave the page.'
          : changed
            ? keeping === 'pending'
              ? 'Keeping the draft in this browser…'
              : 'The draft is kept in this browser until you save it.'
            : model === null
              ? 'Nothing entered yet.'
              : 'No changes since the version shown.'}
      </p>
      <TextField
        label="Note"
        id="version-note"
        fieldClassName="mt-2"
        placeholder="What changed, and why"
        maxLength={2000}
        value={note}
        onChange={(event) => setNote(event.target.value)}
      />
      <Button
        variant="primary"
        className="mt-3 w-full"
        pending={saving}
        disabled={!changed}
        onClick={() => void save()}
      >
        {model === null ? 'Create the model' : `Save version ${model.latestNumber + 1}`}
      </Button>
      {hindrance !== null && (
        <Notice tone="caution" className="mt-3">
          {hindrance}
        </Notice>
      )}
      {problem !== null && (
        <ProblemNotice
          className="mt-3"
          problem={problem}
          action={
            problem.code === 'version_conflict' && model !== null ? (
              <>
                <ButtonLink size="small" href={paths.model(team, model.id)} target="_blank">
                  Open theirs beside this
                </ButtonLink>
                <Button size="small" variant="quiet" onClick={() => void saveAfterTheirs(model.id)}>
                  Save mine after theirs
                </Button>
              </>
            ) : undefined
          }
        />
      )}
    </section>
  );
}
