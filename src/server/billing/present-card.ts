/** The saved card of a team as it may be shown. */
import { CardSetup, SavedCard } from '@db/models/cards.ts';
import type { CardAnswer } from '@/contracts/cards.ts';
import { nowText } from '../clock.ts';

export async function presentCard(teamId: string): Promise<CardAnswer> {
  const now = nowText();
  const card = await SavedCard.findOne({ where: { teamId, removedAt: null } });
  const setup = await CardSetup.findOne({ where: { teamId }, order: [['id', 'DESC']] });
  const open = setup?.state === 'pending' && setup.expiresAt > now;
  return {
    card: card && {
      brand: card.brand,
      lastFour: card.lastFour,
      expiryMonth: card.expiryMonth,
      expiryYear: card.expiryYear,
      // A card holds to the end of the month that is printed on it.
      expired: card.expiryYear * 12 + card.expiryMonth < Number(now.slice(0, 4)) * 12 + Number(now.slice(5, 7)),
      savedAt: card.savedAt,
    },
    openPageUrl: open ? setup.pageUrl : null,
  };
}
