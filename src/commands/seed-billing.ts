/** The demo's money: billing details, one paid top-up with its invoice, one open pro-forma. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { reconcileTopUps } from '@/server/billing/reconcile-top-ups.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { sendReceipts } from '@/server/billing/send-receipts.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { startTopUp } from '@/server/billing/start-top-up.ts';
import { env } from '@/server/env.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { must } from './must.ts';

export async function seedBilling(options: { teamId: string; team: string; finance: Actor }): Promise<void> {
  const { teamId, team, finance } = options;
  must(
    await setBillingDetails({
      actor: finance,
      team,
      billingDetails: {
        name: 'Tarn & Fell Modelling Ltd',
        address: '4 Sheepfold Yard\nInventon IV3 3NT',
        country: 'GB',
        vatNumber: null,
        email: null,
      },
    }),
  );
  must(
    await requestProForma({
      actor: finance,
      team,
      pack: '500',
      currency: 'GBP',
      purchaseOrder: 'TF-2026-118',
      termsDays: 30,
    }),
  );
  if (env().STRIPE_SECRET_KEY || !env().STRIPE_FAKE_URL) {
    // A real payment service would want a real card; the demo's jobs need credits all the same.
    const grant = { teamId, amountMicrocredits: 100_000_000, reason: 'Demo credits', grantId: `demo:${teamId}` };
    await inWriteTransaction(() => grantCredits(grant));
    return;
  }
  const { checkoutUrl } = must(await startTopUp({ actor: finance, team, pack: '100', currency: 'GBP' }));
  const paid = await fetch(checkoutUrl, {
    method: 'POST',
    headers: { 'Content-Type': 'application/x-www-form-urlencoded' },
    body: new URLSearchParams({ way: 'card', card: '4242 4242 4242 4242' }).toString(),
    redirect: 'manual',
  });
  if (paid.status !== 303) throw new Error(`The practice payment was not taken: ${paid.status}.`);
  const { paid: count } = await reconcileTopUps({ which: 'all' });
  if (count !== 1) throw new Error('The demo’s top-up was not paid.');
  await sendReceipts();
}
