/** The saved card: what is shown of it, and saving, replacing and removing it. Its number is typed elsewhere. */
import { useRef, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { Button, ButtonLink } from '@/components/ui/Button.tsx';
import { ConfirmButton } from '@/components/ui/Dialog.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { Spinner } from '@/components/ui/Progress.tsx';
import { removeCard, saveCard, type CardAnswer } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';

const twoDigits = (count: number): string => String(count).padStart(2, '0');
const brandText = (brand: string): string => brand.charAt(0).toUpperCase() + brand.slice(1);

export function SavedCard({
  team,
  card,
  openPageUrl,
  returned,
  mayChange,
  onRemoved,
}: CardAnswer & {
  team: string;
  /** The person has just come back from the service’s page. */
  returned: boolean;
  mayChange: boolean;
  onRemoved: () => Promise<void>;
}) {
  const key = useRef(intentKey());
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);

  async function open(): Promise<void> {
    setPending(true);
    const called = await callApi(saveCard, { path: { team }, body: {}, idempotencyKey: key.current });
    if (called.ok) return window.location.assign(called.value.pageUrl);
    setProblem(called.problem);
    setPending(false);
  }

  async function remove(): Promise<void> {
    const called = await callApi(removeCard, { path: { team } });
    setProblem(called.ok ? null : called.problem);
    if (called.ok) await onRemoved();
  }

  return (
    <div className="flex flex-col gap-3">
      {card ? (
        <p>
          <b className="font-semibold">
            {brandText(card.brand)} ending {card.lastFour}
          </b>
          <span className={card.expired ? 'block font-medium text-congo' : 'block text-soft'}>
            {card.expired ? 'Expired' : 'Good until'} {twoDigits(card.expiryMonth)}/{card.expiryYear}
          </span>
        </p>
      ) : (
        <p className="text-soft">No card is saved.</p>
      )}
      {openPageUrl && returned && (
        <Notice>
          <span className="inline-flex items-center gap-2">
            <Spinner /> The payment service has not confirmed the card yet.
          </span>
        </Notice>
      )}
      {problem && <ProblemNotice problem={problem} />}
      {mayChange && (
        <div className="flex flex-wrap gap-2">
          <Button pending={pending} onClick={() => void open()}>
            {card ? 'Replace the card' : 'Save a card'}
          </Button>
          {openPageUrl && !returned && (
            <ButtonLink variant="quiet" href={openPageUrl}>
              Go on where you left
            </ButtonLink>
          )}
          {card && (
            <ConfirmButton
              title={`Remove the card ending ${card.lastFour}?`}
              question={<p>Automatic top-up is switched off with it. What has been charged stays as it is.</p>}
              confirm="Remove the card"
              onConfirm={remove}
            >
              Remove
            </ConfirmButton>
          )}
        </div>
      )}
      <p className="text-xs text-soft">
        The number is typed on the payment service’s page. We keep the brand, the last four digits and the expiry.
      </p>
    </div>
  );
}
