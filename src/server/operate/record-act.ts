/** Records what an operator did, in the transaction of the act itself: both are there, or neither. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { OperatorAct } from '@db/models/finance.ts';
import type { operatorActKinds } from '@/contracts/operate.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';

export async function recordAct(options: {
  userId: string | null;
  act: (typeof operatorActKinds)[number];
  teamId?: string | null;
  subjectId?: string | null;
  details?: Record<string, unknown>;
}): Promise<void> {
  const { userId, act, teamId = null, subjectId = null, details = {} } = options;
  await inWriteTransaction(() =>
    OperatorAct.create({ id: newId('act'), at: nowText(), userId, act, teamId, subjectId, details }),
  );
}
