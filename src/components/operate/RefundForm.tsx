/** Refunds unused credits of one invoice, and shows what has been given back. */
import { useRef, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { creditsField, parseCredits } from '@/components/budgets/credits-field.ts';
import { exactCreditsText, moneyText } from '@/components/ui/amounts-text.ts';
import { Button } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import { readRefundable, refundPurchase, type Refundable } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { returnWords } from './dispute-words.ts';

export function RefundForm({ invoiceId, initial }: { invoiceId: string; initial: Refundable }) {
  const [present, setPresent] = useState(initial);
  const [amount, setAmount] = useState(creditsField(initial.refundableMicrocredits || null));
  const [reason, setReason] = useState('');
  const [pending, setPending] = useState(false);
  const [checked, setChecked] = useState(false);
  const [done, setDone] = useState<string | null>(null);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const intent = useRef({ of: '', key: '' });
  const parsed = parseCredits(amount);
  const amountMicrocredits = parsed.ok ? parsed.microcredits : null;

  async function refund(): Promise<void> {
    setChecked(true);
    if (amountMicrocredits === null || !reason.trim() || pending) return;
    setPending(true);
    const of = `${amountMicrocredits} ${reason}`;
    if (intent.current.of !== of) intent.current = { of, key: intentKey() };
    const called = await callApi(refundPurchase, {
      path: { invoice: invoiceId },
      body: { amountMicrocredits, reason },
      idempotencyKey: intent.current.key,
    });
    setProblem(called.ok ? null : called.problem);
    if (called.ok) {
      const { total } = called.value;
      setDone(`${moneyText(total.amountMinor, total.currency)} are on their way, with a credit note.`);
      setChecked(false);
      setReason('');
      intent.current = { of: '', key: '' };
      const read = await callApi(readRefundable, { path: { invoice: invoiceId } });
      if (read.ok) {
        setPresent(read.value);
        setAmount(creditsField(read.value.refundableMicrocredits || null));
      }
    }
    setPending(false);
  }

  const { refundableMicrocredits: free, returns, disputed } = present;
  return (
    <div className="flex flex-col gap-4">
      <p className="text-soft">
        {disputed
          ? 'The payment is disputed: the bank gives the money back, not we.'
          : free === 0
            ? 'Nothing of this purchase can be refunded: it is spent, held or given back.'
            : `${exactCreditsText(free)} credits are unused and can be refunded.`}
      </p>
      {returns.length > 0 && (
        <ul className="border-t border-rule text-sm">
          {returns.map((one) => (
            <li key={one.id} className="flex flex-wrap justify-between gap-x-6 border-b border-rule py-2">
              <span>
                {exactCreditsText(one.amountMicrocredits)} credits,{' '}
                {moneyText(one.total.amountMinor, one.total.currency)}, {one.creditNoteNumber}
                <span className="block text-xs text-soft">{one.problem ?? one.reason}</span>
              </span>
              <StateLabel tone={returnWords[one.state].tone}>{returnWords[one.state].words}</StateLabel>
            </li>
          ))}
        </ul>
      )}
      {done && <Notice tone="done">{done}</Notice>}
      {free > 0 && (
        <WhenLive>
          <form
            className="flex max-w-xl flex-col gap-4"
            noValidate
            onSubmit={(event) => {
              event.preventDefault();
              void refund();
            }}
          >
            <TextField
              label="Credits to take back"
              unit="credits"
              inputMode="decimal"
              value={amount}
              error={checked && amountMicrocredits === null ? 'A number of credits above 0.' : undefined}
              onChange={(event) => setAmount(event.target.value)}
            />
            <TextField
              label="Reason"
              hint="One sentence; it stands on the credit note."
              maxLength={200}
              value={reason}
              error={checked && !reason.trim() ? 'Say why.' : undefined}
              onChange={(event) => setReason(event.target.value)}
            />
            {problem && <ProblemNotice problem={problem} />}
            <div>
              <Button type="submit" variant="primary" pending={pending}>
                Refund and issue the credit note
              </Button>
            </div>
          </form>
        </WhenLive>
      )}
    </div>
  );
}
