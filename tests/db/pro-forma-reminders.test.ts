/** Reminders of pro-formas: once before they are due, once after, to those whom the purchase concerns. */
import { afterAll, expect, it } from 'vitest';
import { markTransferReceived } from '@/server/billing/mark-transfer-received.ts';
import { remindProFormas } from '@/server/billing/remind-pro-formas.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { setClock } from '@/server/clock.ts';
import { makeTeam } from '@tests/factories/people.ts';
import { mailsTo } from '@tests/support/mailbox.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
afterAll(() => setClock(null));

it('are written three days before the due date and when it has passed, each once, and not once paid', async () => {
  const { team, actors, people } = await makeTeam();
  const by = { actor: actors.finance, team: team.slug };
  const address = { name: 'C Ltd', address: '1 Row', country: 'GB', vatNumber: null, email: 'accounts@c.example' };
  await setBillingDetails({ ...by, billingDetails: address });
  const ask = async (purchaseOrder: string) => {
    const asked = await requestProForma({ ...by, pack: '25', currency: 'GBP', purchaseOrder, termsDays: 14 });
    if (!asked.ok) throw new Error(asked.detail);
    return asked.value.proForma;
  };
  const open = await ask('PO-open');
  const paid = await ask('PO-paid');
  await markTransferReceived({ actor: { kind: 'system', reason: 'test' }, proFormaId: paid.id });
  const due = Date.parse(open.dueAt);
  const dayMs = 24 * 60 * 60 * 1000;
  const subjects = async () => (await mailsTo(address.email)).map(({ subject }) => subject);

  setClock(() => due - 4 * dayMs);
  await remindProFormas();
  expect(await subjects()).toEqual([]);
  for (const at of [due - 2 * dayMs, due - dayMs, due + dayMs, due + 2 * dayMs]) {
    setClock(() => at);
    await remindProFormas();
  }
  expect(await subjects()).toEqual([
    expect.stringContaining(`${open.number} is due on`),
    `Pro-forma ${open.number} is overdue`,
  ]);
  const [letter] = await mailsTo(people.finance.email);
  expect(letter?.text).toContain('PO PO-open');
  expect(letter?.html).toContain('See the pro-forma');
  expect(await mailsTo(people.owner.email)).toEqual([]);
});
