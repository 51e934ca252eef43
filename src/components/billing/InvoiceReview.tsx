/** Finance's word on an invoice: approved, questioned, or to be reviewed again, with what was said before. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Moment } from '@/components/ui/Amounts.tsx';
import { Button } from '@/components/ui/Button.tsx';
import { TextAreaField } from '@/components/ui/Field.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import { reviewInvoice, type InvoiceDocument } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { threadChanged } from './InvoiceThread.tsx';
import { reviewWords } from './invoice-words.ts';

export interface InvoiceReviewProps {
  team: string;
  timeZone: string;
  mayReview: boolean;
  invoice: Pick<InvoiceDocument, 'id' | 'reviewState' | 'review'>;
}
type ReviewState = InvoiceDocument['reviewState'];

export function InvoiceReview({ team, timeZone, mayReview, invoice: initial }: InvoiceReviewProps) {
  const [invoice, setInvoice] = useState(initial);
  const [comment, setComment] = useState('');
  const [pending, setPending] = useState<ReviewState | null>(null);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);

  async function review(state: ReviewState): Promise<void> {
    setPending(state);
    const called = await callApi(reviewInvoice, { path: { team, invoice: invoice.id }, body: { state, comment } });
    setPending(null);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setInvoice(called.value.invoice);
    setComment('');
    if (state === 'questioned') window.dispatchEvent(new Event(threadChanged));
  }

  const now = reviewWords[invoice.reviewState];
  return (
    <section aria-labelledby="review" className="screen-only">
      <h2 id="review" className="mb-1 font-semibold">
        Review
      </h2>
      <p className="mb-3" aria-live="polite">
        <StateLabel tone={now.tone}>{now.words}</StateLabel>
      </p>
      {invoice.review.length > 0 && (
        <ol className="mb-4 border-t border-rule text-sm">
          {invoice.review.map((entry) => (
            <li key={`${entry.at} ${entry.state}`} className="border-b border-rule py-2">
              <span className="font-medium">{reviewWords[entry.state].words}</span> by {entry.person}
              <span className="block text-xs text-soft">
                <Moment time={entry.at} timeZone={timeZone} />
              </span>
              {entry.comment && <span className="block [overflow-wrap:anywhere]">{entry.comment}</span>}
            </li>
          ))}
        </ol>
      )}
      {mayReview && (
        <WhenLive>
          <div className="flex flex-col gap-3">
            <TextAreaField
              label="Comment"
              hint="A question needs one; it goes to Burette by e-mail."
              value={comment}
              maxLength={2_000}
              onChange={(event) => setComment(event.target.value)}
            />
            {problem && <ProblemNotice problem={problem} />}
            <div className="flex flex-wrap gap-2">
              {invoice.reviewState !== 'approved' && (
                <Button size="small" pending={pending === 'approved'} onClick={() => void review('approved')}>
                  Approve
                </Button>
              )}
              {invoice.reviewState !== 'questioned' && (
                <Button size="small" pending={pending === 'questioned'} onClick={() => void review('questioned')}>
                  Question it
                </Button>
              )}
              {invoice.reviewState !== 'to_review' && (
                <Button
                  size="small"
                  variant="quiet"
                  pending={pending === 'to_review'}
                  onClick={() => void review('to_review')}
                >
                  Put back to review
                </Button>
              )}
            </div>
          </div>
        </WhenLive>
      )}
    </section>
  );
}
