/** Makes an API token: the secret is returned once, its hash is stored. Who may ask is decided by the callers. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ApiToken } from '@db/models/people.ts';
import type { TokenScope } from '@/domain/teams/permissions.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { hashSecret, newSecret } from './secret-hash.ts';

export interface IssueTokenOptions {
  userId: string;
  teamId: string;
  name: string;
  scopes: TokenScope[];
  /** RFC 3339, null: until revoked. */
  expiresAt: string | null;
  /** Microcredits; absent or null: no cap of its own. */
  capMicrocredits?: number | null;
}

export async function issueToken(options: IssueTokenOptions): Promise<{ token: ApiToken; secret: string }> {
  // A fixed beginning lets scanners for leaked secrets recognise ours.
  const secret = `burette_${newSecret()}`;
  const token = await inWriteTransaction(() =>
    ApiToken.create({ id: newId('token'), tokenHash: hashSecret(secret), createdAt: nowText(), ...options }),
  );
  return { token, secret };
}
