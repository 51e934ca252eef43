/** What teams owe after disputes that were lost; an operator settles it or writes it off, with a reason. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { Moment, Money } from '@/components/ui/Amounts.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import { decideReceivable, type ReceivableDocument } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { paths } from '@/paths.ts';
import { receivableWords } from './dispute-words.ts';

export function Receivables({ initial }: { initial: ReceivableDocument[] }) {
  const [rows, setRows] = useState(initial);
  const decided = (id: string, change: Pick<ReceivableDocument, 'state' | 'reason'>) =>
    setRows((present) => present.map((row) => (row.id === id ? { ...row, ...change } : row)));
  return (
    <ul className="border-t border-rule">
      {rows.map((row) => (
        <li key={row.id} className="border-b border-rule py-4">
          <div className="flex flex-wrap items-baseline justify-between gap-x-6 gap-y-1">
            <p>
              <b className="font-semibold">{row.team.name}</b> owes <Money {...row.total} /> of{' '}
              <a className="link" href={paths.operateInvoice(row.invoiceId)}>
                {row.invoiceNumber}
              </a>{' '}
              <span className="text-soft">
                since <Moment time={row.createdAt} dayOnly />
              </span>
            </p>
            <StateLabel tone={receivableWords[row.state].tone}>{receivableWords[row.state].words}</StateLabel>
          </div>
          {row.state === 'open' ? (
            <Decision row={row} onDecided={decided} />
          ) : (
            row.reason && <p className="mt-1 text-sm text-soft">{row.reason}</p>
          )}
        </li>
      ))}
    </ul>
  );
}

function Decision({
  row,
  onDecided,
}: {
  row: ReceivableDocument;
  onDecided: (id: string, change: Pick<ReceivableDocument, 'state' | 'reason'>) => void;
}) {
  const [reason, setReason] = useState('');
  const [pending, setPending] = useState<'settled' | 'written_off' | null>(null);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [checked, setChecked] = useState(false);

  async function decide(outcome: 'settled' | 'written_off'): Promise<void> {
    setChecked(true);
    if (!reason.trim() || pending) return;
    setPending(outcome);
    const called = await callApi(decideReceivable, { path: { receivable: row.id }, body: { outcome, reason } });
    setPending(null);
    setProblem(called.ok ? null : called.problem);
    if (called.ok) onDecided(row.id, { state: called.value.state, reason });
  }

  return (
    <WhenLive>
      <form
        className="mt-3 flex max-w-2xl flex-col gap-3"
        onSubmit={(event) => {
          event.preventDefault();
          void decide('settled');
        }}
      >
        <TextField
          label="Reason"
          hint="One sentence, such as the transfer’s date. The team reads it on the invoice."
          maxLength={200}
          value={reason}
          error={checked && !reason.trim() ? 'Say how it was settled, or why it is written off.' : undefined}
          onChange={(event) => setReason(event.target.value)}
        />
        {problem && <ProblemNotice problem={problem} />}
        <div className="flex flex-wrap gap-2">
          <Button type="submit" variant="primary" size="small" pending={pending === 'settled'}>
            It is paid
          </Button>
          <Button size="small" pending={pending === 'written_off'} onClick={() => void decide('written_off')}>
            Write it off
          </Button>
        </div>
        <Notice still>Until then no job of {row.team.name} can be launched. A decision stays.</Notice>
      </form>
    </WhenLive>
  );
}
