/** Reads a model from a file, SBML or our own JSON, says what was understood, and opens it in the editor. */
import { FileUp } from 'lucide-react';
import { useRef, useState, type DragEvent } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { Spinner } from '@/components/ui/Progress.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { importSbml, networkDocument } from '@/contracts/network.ts';
import { checkNetwork } from '@/domain/network/check-network.ts';
import type { NetworkDocument, Problem } from '@/domain/network/document.ts';
import { limits } from '@/domain/limits.ts';
import { paths } from '@/paths.ts';
import { draftOf } from './draft.ts';
import { draftStorageKey, keepDraft } from './use-draft.ts';

interface Understood {
  name: string;
  network: NetworkDocument;
  problems: Problem[];
}
type Reading =
  | { state: 'idle' }
  | { state: 'reading'; file: string }
  | { state: 'refused'; file: string; problem: Pick<ProblemDocument, 'title' | 'detail' | 'errors' | 'requestId'> }
  | { state: 'understood'; file: string; model: Understood };

export function ImportModel({ team }: { team: string }) {
  const [reading, setReading] = useState<Reading>({ state: 'idle' });
  const [over, setOver] = useState(false);
  const input = useRef<HTMLInputElement>(null);

  async function read(file: File): Promise<void> {
    setReading({ state: 'reading', file: file.name });
    const read = await readModelFile(team, file);
    setReading(
      read.ok
        ? { state: 'understood', file: file.name, model: read.model }
        : { state: 'refused', file: file.name, problem: read.problem },
    );
  }
  function onDrop(event: DragEvent): void {
    event.preventDefault();
    setOver(false);
    const [file] = event.dataTransfer.files;
    if (file) void read(file);
  }

  return (
    <div
      className={`border border-dashed p-4 ${over ? 'border-bromo bg-glass' : 'border-edge'}`}
      onDragOver={(event) => {
        event.preventDefault();
        setOver(true);
      }}
      onDragLeave={() => setOver(false)}
      onDrop={onDrop}
    >
      <div className="flex flex-wrap items-center justify-between gap-3">
        <p className="text-sm text-soft">Drop an SBML file or our own JSON here, or</p>
        <Button size="small" onClick={() => input.current?.click()}>
          {reading.state === 'reading' ? <Spinner /> : <FileUp aria-hidden="true" className="h-4 w-4" />}
          Choose a file to import
        </Button>
        <input
          ref={input}
          type="file"
          accept=".xml,.sbml,.json,application/xml,application/sbml+xml,application/json"
          aria-label="Model file"
          tabIndex={-1}
          className="sr-only"
          onChange={(event) => {
            const [file] = event.target.files ?? [];
            if (file) void read(file);
            event.target.value = '';
          }}
        />
      </div>
      {reading.state === 'refused' && (
        <div className="mt-3">
          <p className="mb-2 text-sm font-medium">{reading.file} could not be read. Nothing was stored.</p>
          <ProblemNotice problem={reading.problem} />
        </div>
      )}
      {reading.state === 'understood' && <Report team={team} file={reading.file} model={reading.model} />}
    </div>
  );
}

function Report({ team, file, model }: { team: string; file: string; model: Understood }) {
  const [refused, setRefused] = useState(false);
  const { species, reactions, parameters, compartments, assignmentRules } = model.network;
  const locals = reactions.reduce((sum, { localParameters }) => sum + (localParameters?.length ?? 0), 0);
  const errors = model.problems.filter(({ severity }) => severity === 'error').length;
  const parts: [string, number][] = [
    ['species', species.length],
    ['reactions', reactions.length],
    ['parameters', (parameters?.length ?? 0) + locals],
    ['compartments', compartments?.length ?? 0],
    ['assignment rules', assignmentRules?.length ?? 0],
  ];
  function open(): void {
    const kept = keepDraft(draftStorageKey(team, null, null), draftOf(model.name, model.network));
    if (kept) window.location.assign(paths.newModel(team));
    else setRefused(true);
  }
  return (
    <Notice tone={errors > 0 ? 'caution' : 'done'} className="mt-3" title={`${file} was read as “${model.name}”`}>
      <p>
        Understood:{' '}
        {parts
          .filter(([, count]) => count > 0)
          .map(([words, count]) => `${count} ${words}`)
          .join(', ')}
        .
      </p>
      {model.problems.length > 0 && (
        <ul className="mt-2 max-h-60 list-disc overflow-y-auto pl-5" tabIndex={0} aria-label="What the reader noticed">
          {model.problems.map((problem, index) => (
            <li key={`${problem.path} ${index}`}>
              <b className="font-semibold">{problem.severity === 'information' ? 'note' : problem.severity}: </b>
              {problem.message}
            </li>
          ))}
        </ul>
      )}
      <div className="mt-3 flex flex-wrap items-center gap-3">
        <Button variant="primary" onClick={open}>
          {errors > 0 ? 'Open it in the editor and mend it' : 'Open it in the editor'}
        </Button>
        <span className="text-soft">Nothing is stored in the team until you create the model there.</span>
      </div>
      {refused && (
        <p role="alert" className="mt-2 font-medium text-congo">
          This browser does not let the page keep a draft, so the import cannot be handed to the editor.
        </p>
      )}
    </Notice>
  );
}

type Read = { ok: true; model: Understood } | { ok: false; problem: Extract<Reading, { state: 'refused' }>['problem'] };

const refusal = (title: string, detail: string, errors?: ProblemDocument['errors']): Read => ({
  ok: false,
  problem: { title, detail, requestId: '', ...(errors ? { errors } : {}) },
});

async function readModelFile(team: string, file: File): Promise<Read> {
  if (file.size > limits.modelBodyBytes) {
    return refusal(
      'The file is too large',
      `A model file has at most ${limits.modelBodyBytes / 1e6} MB; this one has ${(file.size / 1e6).toFixed(1)} MB.`,
    );
  }
  const text = await file.text();
  if (text.trim() === '') return refusal('The file is empty', 'Choose a file that holds a model.');
  if (text.trimStart().startsWith('{')) return readJson(file, text);
  const called = await callApi(importSbml, { path: { team }, textBody: { contentType: 'application/sbml+xml', text } });
  if (!called.ok) return { ok: false, problem: called.problem };
  const { name, network, problems } = called.value;
  return { ok: true, model: { name: name || file.name.replace(/\.\w+$/, ''), network, problems } };
}

/** Our own JSON, as downloaded from a model or found in an archive. */
function readJson(file: File, text: string): Read {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (error) {
    return refusal('The file is not JSON', `It begins like JSON but cannot be read: ${(error as Error).message}.`);
  }
  const holder = value as { name?: unknown; network?: unknown };
  const parsed = networkDocument.safeParse(holder.network ?? value);
  if (!parsed.success) {
    return refusal(
      'The file does not hold a model of ours',
      'These places do not fit:',
      parsed.error.issues.map(({ path, code, message }) => ({
        path: path.join('.'),
        code: code ?? 'invalid',
        message,
      })),
    );
  }
  const name = typeof holder.name === 'string' ? holder.name : file.name.replace(/\.json$/i, '');
  return { ok: true, model: { name, network: parsed.data, problems: checkNetwork(parsed.data) } };
}
