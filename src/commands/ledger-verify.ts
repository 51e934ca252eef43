/** `npm run ledger:verify`: recomputes the ledger of the data folder and names the first break. Reads only; exits 1 on a break. */
import { existsSync } from 'node:fs';
import path from 'node:path';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { env } from '@/server/env.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';

const file = path.join(env().BURETTE_DATA_DIR, 'burette.sqlite');
if (!existsSync(file)) {
  console.error('There is no database in the data folder. Start Burette once, or set BURETTE_DATA_DIR.');
  process.exit(2);
}
openDatabase(file);
try {
  const result = await verifyLedger();
  if (result.ok) console.log(`The ledger is whole: ${result.transactions} transactions, head ${result.headHash}.`);
  else {
    console.error(
      `LEDGER BROKEN at transaction ${result.sequence}${result.transactionId ? ` (${result.transactionId})` : ''}: ${result.fault}.`,
    );
    process.exitCode = 1;
  }
} finally {
  await closeDatabase();
}
