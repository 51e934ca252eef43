/** Gives a model another name; versions and jobs keep theirs. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { Dialog } from '@/components/ui/Dialog.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { updateModel } from '@/contracts/network.ts';

export function RenameModel({ team, model }: { team: string; model: { id: string; name: string } }) {
  const [open, setOpen] = useState(false);
  const [name, setName] = useState(model.name);
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  async function rename(): Promise<void> {
    setPending(true);
    const called = await callApi(updateModel, { path: { team, model: model.id }, body: { name: name.trim() } });
    setPending(false);
    if (called.ok) window.location.reload();
    else setProblem(called.problem);
  }
  return (
    <>
      <Button variant="quiet" onClick={() => setOpen(true)}>
        Rename
      </Button>
      <Dialog open={open} onClose={() => setOpen(false)} title="Rename the model">
        <form
          onSubmit={(event) => {
            event.preventDefault();
            void rename();
          }}
        >
          <TextField
            label="Name"
            value={name}
            maxLength={200}
            required
            autoFocus
            onChange={(event) => setName(event.target.value)}
          />
          {problem && <ProblemNotice className="mt-3" problem={problem} />}
          <div className="mt-5 flex justify-end gap-2">
            <Button onClick={() => setOpen(false)}>Keep as it is</Button>
            <Button type="submit" variant="primary" pending={pending} disabled={name.trim() === ''}>
              Rename
            </Button>
          </div>
        </form>
      </Dialog>
    </>
  );
}
