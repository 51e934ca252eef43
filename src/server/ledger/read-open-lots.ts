/** The lots of a team that still hold credits. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import type { OpenLot } from '@/domain/ledger/lots.ts';

export interface OpenLotRow extends OpenLot {
  creditsMicrocredits: number;
  netMinor: number;
  currency: string | null;
  purchaseId: string | null;
}

export async function readOpenLots(teamId: string): Promise<OpenLotRow[]> {
  return database().query<OpenLotRow>(
    `SELECT * FROM (
       SELECT id, source, creditsMicrocredits, netMinor, currency, purchaseId, transactionSequence AS sequence,
         coalesce((SELECT remainingMicrocredits FROM lotDraws WHERE lotId = lots.id
                   ORDER BY transactionSequence DESC LIMIT 1), creditsMicrocredits) AS remainingMicrocredits,
         coalesce((SELECT frozenMicrocredits FROM lotDraws WHERE lotId = lots.id
                   ORDER BY transactionSequence DESC LIMIT 1), 0) AS frozenMicrocredits
       FROM lots WHERE teamId = $teamId)
     WHERE remainingMicrocredits > 0 ORDER BY sequence`,
    { type: QueryTypes.SELECT, bind: { teamId } },
  );
}
