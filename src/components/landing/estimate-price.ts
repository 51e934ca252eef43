/** The arithmetic of the public estimator: the same rule as the meter, and the smallest pack that covers it. */
import { chargeMicrocredits } from '@/domain/pricing/price-of.ts';
import { microcreditsPerCredit, type CreditPack } from '@/domain/pricing/price-book.ts';

/** Microcredits for replicates × events at a rate in microcredits per million events. */
export const estimatePrice = (options: { replicates: number; eventsPerReplicate: number; rate: number }): number =>
  chargeMicrocredits(BigInt(options.replicates) * BigInt(options.eventsPerReplicate), options.rate);

/** The smallest pack that covers the price; beyond the largest, as many of the largest as it takes. */
export function packFor(packs: readonly CreditPack[], microcredits: number): { pack: CreditPack; packs: number } {
  const bySize = [...packs].sort((one, other) => one.credits - other.credits);
  const enough = bySize.find(({ credits }) => credits * microcreditsPerCredit >= microcredits);
  if (enough) return { pack: enough, packs: 1 };
  const largest = bySize.at(-1);
  if (!largest) throw new Error('The price book has no packs.');
  return { pack: largest, packs: Math.ceil(microcredits / (largest.credits * microcreditsPerCredit)) };
}
