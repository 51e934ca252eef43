/** Opens a pro-forma: an offer to pay a pack by bank transfer, in a number series of its own, not a tax document. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ProForma } from '@db/models/billing.ts';
import type { ProFormaDocument } from '@/contracts/billing.ts';
import { composeFace, invoiceNumber } from '@/domain/billing/invoice-face.ts';
import type { Currency } from '@/domain/pricing/price-book.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import { describeProFormas } from './describe-pro-formas.ts';
import { pricePurchase } from './price-purchase.ts';
import { readBooksRate } from './read-books-rate.ts';
import { seller } from './seller.ts';

export const proFormaSeries = 'PF';
const dayMs = 24 * 60 * 60 * 1000;

export interface RequestProForma {
  actor: Actor;
  team: string;
  pack: string;
  currency: Currency;
  purchaseOrder: string;
  termsDays: number;
}

/** Needs billing details: a transfer is paid against a full document. */
export async function requestProForma(options: RequestProForma): Promise<Result<{ proForma: ProFormaDocument }>> {
  const { actor, pack, currency, purchaseOrder, termsDays } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'billing:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  return inWriteTransaction(async () => {
    const priced = await pricePurchase({ team, pack, currency });
    if (!priced.ok) return priced;
    const { buyerComplete, buyer, tax, credits, creditsMicrocredits, netMinor, priceBookId } = priced.value;
    if (!buyerComplete)
      return refuse('billing_details_missing', 'Set the billing details first: a pro-forma names who pays.');
    const issuedAt = nowText();
    const year = Number(issuedAt.slice(0, 4));
    const last = (await ProForma.max('numberInYear', { where: { series: proFormaSeries, year } })) as number | null;
    const numberInYear = (last ?? 0) + 1;
    const books = await readBooksRate(currency, issuedAt);
    const face = composeFace({
      seller: seller(),
      buyer,
      credits,
      creditsMicrocredits,
      netMinor,
      currency,
      tax,
      books,
      purchaseOrder,
    });
    const row = await ProForma.create({
      id: newId('proforma'),
      series: proFormaSeries,
      year,
      numberInYear,
      number: invoiceNumber(proFormaSeries, year, numberInYear),
      teamId: team.id,
      issuedAt,
      ...face,
      state: 'open',
      userId,
      pack,
      priceBookId,
      tax,
      termsDays,
      dueAt: nowText(termsDays * dayMs),
    });
    const [proForma] = await describeProFormas([row]);
    if (!proForma) throw new Error('The pro-forma was not described.');
    return accept({ proForma });
  });
}
