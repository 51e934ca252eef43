/** Letters about money as they arrive at the SMTP fake: to whom, what they say, what is attached. */
import { fork, type ChildProcess } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import nodemailer from 'nodemailer';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { TeamBudget } from '@db/models/finance.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { reconcileTopUps } from '@/server/billing/reconcile-top-ups.ts';
import { refreshDispute } from '@/server/billing/refresh-dispute.ts';
import { reconcileCardSetups } from '@/server/billing/reconcile-card-setups.ts';
import { remindProFormas } from '@/server/billing/remind-pro-formas.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { runAutomaticTopUps } from '@/server/billing/run-automatic-top-ups.ts';
import { saveCard } from '@/server/billing/save-card.ts';
import { sendReceipts } from '@/server/billing/send-receipts.ts';
import { setAutomaticTopUp } from '@/server/billing/set-automatic-top-up.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { startTopUp } from '@/server/billing/start-top-up.ts';
import { sendBudgetAlerts } from '@/server/budgets/send-budget-alerts.ts';
import { nowMs, nowText, setClock } from '@/server/clock.ts';
import { sendOutbox } from '@/server/mail/send-outbox.ts';
import { projectRoot } from '@/server/project-root.ts';
import { makeTeam } from '@tests/factories/people.ts';
import { decideDispute, openDispute } from '@tests/fakes/payment/api-reversals.ts';
import { value } from '@tests/support/jobs.ts';
import { cards, payByCard, usePaymentFake } from '@tests/support/payment.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

const payment = await usePaymentFake();
useTestDatabase(payment.env);

let fake: ChildProcess;
let ports: { smtpPort: number; mailboxPort: number };
let folder = '';
beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'burette-letters-'));
  const main = path.join(projectRoot, 'tests/fakes/smtp/main.ts');
  fake = fork(main, { execArgv: ['--import', 'tsx'], env: { ...process.env, SMTP_FAKE_FOLDER: folder } });
  ports = await new Promise((resolve) => fake.once('message', (message) => resolve(message as typeof ports)));
}, 60_000);
afterAll(async () => {
  setClock(null);
  const gone = new Promise((resolve) => fake.once('exit', resolve));
  fake.disconnect();
  await gone;
  await rm(folder, { recursive: true, force: true });
});

interface Received {
  subject: string;
  text: string;
  html: string | null;
  attachments: { filename: string; contentType: string }[];
}

it('arrive for each occasion: receipt with its PDF, declined, low balance, pro-forma overdue, dispute and its end', async () => {
  // Events would only do earlier what this test does itself.
  payment.store.state.switches.lose = 1_000;
  const { team, actors, people } = await makeTeam();
  const by = { actor: actors.owner, team: team.slug };
  const billing = 'accounts@letters.example';
  value(
    await setBillingDetails({
      ...by,
      billingDetails: { name: 'L Ltd', address: '1 Row', country: 'GB', vatNumber: null, email: billing },
    }),
  );
  const { checkoutUrl } = value(await startTopUp({ ...by, pack: '25', currency: 'GBP' }));
  await payByCard(checkoutUrl, cards.accepted);
  await reconcileTopUps({ which: 'all' });
  await sendReceipts();

  const intent = Object.values(payment.store.state.intents).find(({ status }) => status === 'succeeded')!;
  const dispute = openDispute(payment.store, payment.webhooks, intent.id);
  value(await refreshDispute(dispute.id));
  decideDispute(payment.store, payment.webhooks, dispute.id, 'won');
  value(await refreshDispute(dispute.id));

  const { pageUrl } = value(await saveCard(by));
  await payByCard(pageUrl, '4000 0000 0000 0341');
  await reconcileCardSetups({ which: 'all' });
  const rule = { thresholdMicrocredits: 1e9, pack: '25', currency: 'GBP' as const, monthlyCeilingMinor: 10_000 };
  value(await setAutomaticTopUp({ ...by, on: true, ...rule }));
  await runAutomaticTopUps();

  await inWriteTransaction(() =>
    TeamBudget.create({
      teamId: team.id,
      monthlyMicrocredits: null,
      lowBalanceMicrocredits: 1e9,
      updatedAt: nowText(),
      updatedBy: null,
    }),
  );
  await sendBudgetAlerts();

  value(await requestProForma({ ...by, pack: '100', currency: 'GBP', purchaseOrder: 'PO 7', termsDays: 14 }));
  const later = nowMs() + 15 * 24 * 3600 * 1000;
  setClock(() => later);
  await remindProFormas();

  const transport = nodemailer.createTransport({ host: '127.0.0.1', port: ports.smtpPort, ignoreTLS: true });
  await sendOutbox({ transport });
  const received = async (to: string): Promise<Received[]> => {
    const answer = await fetch(`http://127.0.0.1:${ports.mailboxPort}/messages?to=${encodeURIComponent(to)}`);
    return ((await answer.json()) as { messages: Received[] }).messages;
  };
  const [toOwner, toBilling] = [await received(people.owner.email), await received(billing)];
  const find = (letters: Received[], subject: RegExp): Received => {
    const found = letters.filter((letter) => subject.test(letter.subject));
    expect(
      found.map((letter) => letter.subject),
      String(subject),
    ).toHaveLength(1);
    return found[0]!;
  };
  const receipt = find(toBilling, /^Receipt BUR-/);
  expect(receipt.attachments).toMatchObject([{ contentType: 'application/pdf' }]);
  // By hand: 25 credits are GBP 22.00 and 20 % tax, 26.40.
  expect(receipt.text).toContain('GBP 26.40');
  for (const letters of [toOwner, toBilling]) {
    const declined = find(letters, /did not pass and is switched off/);
    expect(declined.text).toContain('ending 0341');
    expect(declined.text).toContain(`/t/${team.slug}/billing/automatic-top-up`);
    expect(find(letters, /is disputed$/).text).toContain('25 credits');
    expect(find(letters, /stands$/).text).toContain('can be used again');
  }
  expect(find(toOwner, /left$/).text).toContain('less than the 1,000 credits');
  expect(find(toBilling, /is overdue$/).text).toContain('PO 7');
  for (const letter of [...toOwner, ...toBilling]) expect(letter.html).toContain('<html lang="en">');
}, 60_000);
