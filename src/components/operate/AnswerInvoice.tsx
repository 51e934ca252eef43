/** The thread of a questioned invoice and our answer. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { MessageList } from '@/components/billing/MessageList.tsx';
import { Button } from '@/components/ui/Button.tsx';
import { TextAreaField } from '@/components/ui/Field.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import type { InvoiceMessageDocument } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { answerInvoice } from '@/contracts/operate.ts';

export function AnswerInvoice({ invoiceId, initial }: { invoiceId: string; initial: InvoiceMessageDocument[] }) {
  const [messages, setMessages] = useState(initial);
  const [body, setBody] = useState('');
  const [key, setKey] = useState<string | null>(null);
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);

  async function send(): Promise<void> {
    // The same words sent again after a lost answer are one message.
    const idempotencyKey = key ?? intentKey();
    setKey(idempotencyKey);
    setPending(true);
    const called = await callApi(answerInvoice, { path: { invoice: invoiceId }, body: { body }, idempotencyKey });
    setPending(false);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setKey(null);
    setBody('');
    setMessages(called.value.messages);
  }

  return (
    <section aria-labelledby="thread">
      <h2 id="thread" className="mb-3 text-lg font-semibold">
        Thread
      </h2>
      {messages.length === 0 && <p className="border-t border-rule py-2 text-soft">Nobody has written so far.</p>}
      <MessageList messages={messages} timeZone="UTC" ours="operator" />
      <WhenLive>
        <form
          className="mt-5 flex flex-col items-start gap-3"
          onSubmit={(event) => {
            event.preventDefault();
            if (!pending) void send();
          }}
        >
          <TextAreaField
            label="Answer"
            hint="Goes to the team’s owners and finance admins by e-mail and stands on the invoice’s page."
            required
            maxLength={2_000}
            value={body}
            onChange={(event) => {
              setKey(null);
              setBody(event.target.value);
            }}
            fieldClassName="w-full"
          />
          {problem && <ProblemNotice problem={problem} />}
          <Button type="submit" variant="primary" pending={pending}>
            Send the answer
          </Button>
        </form>
      </WhenLive>
    </section>
  );
}
