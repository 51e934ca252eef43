/** Prices a credit pack for a team now: the book in force, the tax decision, the totals. */
import { TaxRateRow } from '@db/models/billing.ts';
import type { Team } from '@db/models/people.ts';
import { decideTax, type TaxDecision } from '@/domain/billing/decide-tax.ts';
import { priceSale, type Party, type SalePrice } from '@/domain/billing/invoice-face.ts';
import { microcreditsPerCredit, type Currency } from '@/domain/pricing/price-book.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { presentPriceBook } from './present-price-book.ts';
import { readBuyer } from './read-buyer.ts';
import { seller } from './seller.ts';

export interface PricedPurchase extends SalePrice {
  pack: string;
  credits: number;
  creditsMicrocredits: number;
  currency: Currency;
  priceBookId: string;
  tax: TaxDecision;
  buyer: Party;
  /** False until billing details are set. */
  buyerComplete: boolean;
}

export async function pricePurchase(options: {
  team: Team;
  pack: string;
  currency: Currency;
}): Promise<Result<PricedPurchase>> {
  const { team, pack: packId, currency } = options;
  const at = nowText();
  const book = await presentPriceBook(at);
  const pack = book.packs.find(({ id }) => id === packId);
  if (!pack)
    return refuse(
      'unknown_pack',
      `There is no pack “${packId}”. Choose one of ${book.packs.map(({ id }) => id).join(', ')} credits.`,
    );
  const { buyer, complete } = await readBuyer(team);
  const rates = await TaxRateRow.findAll({ raw: true });
  const tax = decideTax({ seller: seller(), buyer, taxPoint: at, rates });
  return accept({
    pack: pack.id,
    credits: pack.credits,
    creditsMicrocredits: pack.credits * microcreditsPerCredit,
    currency,
    priceBookId: book.id,
    tax,
    buyer,
    buyerComplete: complete,
    ...priceSale(pack.netMinor[currency], tax),
  });
}
