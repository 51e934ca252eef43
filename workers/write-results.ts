/** The worker that writes results: joins batches, makes tables and archive. It has no database and no clock. */
import { writeResults } from '@/archives/write-results.ts';

export default writeResults;
