/** What finance and the operator write to each other about an invoice. */
import { useEffect, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { Button } from '@/components/ui/Button.tsx';
import { TextAreaField } from '@/components/ui/Field.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import { listInvoiceMessages, writeInvoiceMessage, type InvoiceMessageDocument } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { MessageList } from './MessageList.tsx';

/** An event of the window: a question elsewhere on the page has added to the thread. */
export const threadChanged = 'burette:thread';

export interface InvoiceThreadProps {
  team: string;
  timeZone: string;
  invoiceId: string;
  mayWrite: boolean;
  initial: InvoiceMessageDocument[];
}

export function InvoiceThread({ team, timeZone, invoiceId, mayWrite, initial }: InvoiceThreadProps) {
  const [messages, setMessages] = useState(initial);
  const [body, setBody] = useState('');
  const [key, setKey] = useState<string | null>(null);
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  useEffect(() => {
    const read = async (): Promise<void> => {
      const called = await callApi(listInvoiceMessages, { path: { team, invoice: invoiceId } });
      if (called.ok) setMessages(called.value.messages);
    };
    const listen = (): void => void read();
    window.addEventListener(threadChanged, listen);
    return () => window.removeEventListener(threadChanged, listen);
  }, [team, invoiceId]);

  async function send(): Promise<void> {
    // The same words sent again after a lost answer are one message.
    const idempotencyKey = key ?? intentKey();
    setKey(idempotencyKey);
    setPending(true);
    const called = await callApi(writeInvoiceMessage, {
      path: { team, invoice: invoiceId },
      body: { body },
      idempotencyKey,
    });
    setPending(false);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setKey(null);
    setBody('');
    setMessages(called.value.messages);
  }

  if (messages.length === 0) return null;
  return (
    <section aria-labelledby="thread">
      <h2 id="thread" className="mb-2 font-semibold">
        Thread with Burette
      </h2>
      <MessageList messages={messages} timeZone={timeZone} ours="team" />
      {mayWrite && (
        <WhenLive>
          <form
            className="mt-3 flex flex-col items-start gap-3"
            onSubmit={(event) => {
              event.preventDefault();
              if (!pending) void send();
            }}
          >
            <TextAreaField
              label="Write to Burette"
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
            <Button type="submit" size="small" pending={pending}>
              Send
            </Button>
          </form>
        </WhenLive>
      )}
    </section>
  );
}
