/** Says whether the service can take work: the database answers, the engine is loaded, the ledger was found whole. */
import { database } from '@db/connection.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { env } from '../env.ts';
import { ledgerStanding } from '../ledger/watch-ledger.ts';

export async function reportHealth(): Promise<
  Result<{
    status: 'ok';
    engineVersion: string;
    database: 'ok';
    workers: number;
    ledger: 'whole' | 'broken' | 'unknown';
  }>
> {
  await database().query('SELECT 1');
  return accept({
    status: 'ok',
    engineVersion,
    database: 'ok',
    workers: env().BURETTE_WORKERS,
    ledger: ledgerStanding(),
  });
}
