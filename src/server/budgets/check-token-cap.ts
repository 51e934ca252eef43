/** Whether a launch fits what its token may spend. Decided from the ledger, inside the transaction that places the hold. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { ApiToken } from '@db/models/people.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';

/** Microcredits that the segments opened with each token have spent and hold: their last running totals in the ledger. */
export async function usedByTokens(tokenIds: readonly string[]): Promise<Map<string, number>> {
  if (tokenIds.length === 0) return new Map();
  const rows = await database().query<{ tokenId: string; used: number }>(
    `SELECT segments.tokenId AS tokenId, sum(last.segmentHeldMicrocredits + last.segmentSpentMicrocredits) AS used
     FROM segments
     JOIN ledgerTransactions AS last ON last.sequence = (
       SELECT max(sequence) FROM ledgerTransactions WHERE segmentId = segments.id)
     WHERE segments.tokenId IN (:tokenIds)
     GROUP BY segments.tokenId`,
    { type: QueryTypes.SELECT, replacements: { tokenIds } },
  );
  return new Map(rows.map(({ tokenId, used }) => [tokenId, used]));
}

/** `tokenId` null: launched by a person at a browser, whom no token's cap concerns. */
export async function checkTokenCap(options: {
  tokenId: string | null;
  capMicrocredits: number;
}): Promise<Result<null>> {
  const { tokenId, capMicrocredits } = options;
  if (tokenId === null) return accept(null);
  const { capMicrocredits: size } = await ApiToken.findByPk(tokenId, { rejectOnEmpty: true });
  if (size === null || size === undefined) return accept(null);
  const left = size - ((await usedByTokens([tokenId])).get(tokenId) ?? 0);
  if (capMicrocredits <= left) return accept(null);
  return refuse(
    'budget_exceeded',
    `This would hold ${creditsText(capMicrocredits)}; of this token’s cap of ${creditsText(size)}, ${creditsText(Math.max(0, left))} are neither spent nor held. ` +
      'Nothing was started. Lower the job’s cap, or use a token with a higher one.',
  );
}
