/** Messages about an invoice, oldest first; one's own side stands to the right of a quiet rule. */
import { Moment } from '@/components/ui/Amounts.tsx';
import type { InvoiceMessageDocument } from '@/contracts/billing.ts';

export function MessageList(props: {
  messages: readonly InvoiceMessageDocument[];
  timeZone: string;
  ours: InvoiceMessageDocument['side'];
}) {
  const { messages, timeZone, ours } = props;
  return (
    <ol className="flex flex-col gap-3 text-sm" aria-live="polite">
      {messages.map((message) => (
        <li
          key={message.id}
          className={`border-l-2 py-1 pl-3 ${message.side === ours ? 'border-rule' : 'border-bromo bg-panel pr-3'}`}
        >
          <span className="font-medium">{message.person}</span>{' '}
          <span className="text-xs text-soft">
            <Moment time={message.at} timeZone={timeZone} />
          </span>
          <p className="whitespace-pre-line [overflow-wrap:anywhere]">{message.body}</p>
        </li>
      ))}
    </ol>
  );
}
