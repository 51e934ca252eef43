/** Says whether the service can take work: the database answers and the engine is loaded. */
import { database } from '@db/connection.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { env } from '../env.ts';

export async function reportHealth(): Promise<
  Result<{ status: 'ok'; engineVersion: string; database: 'ok'; workers: number }>
> {
  await database().query('SELECT 1');
  return accept({ status: 'ok', engineVersion, database: 'ok', workers: env().BURETTE_WORKERS });
}
