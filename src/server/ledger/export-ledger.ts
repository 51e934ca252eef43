/** Ledger entries as rows for a spreadsheet, newest first, read page by page while they are sent. */
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { scaledFigure, spreadsheetCsv } from '@/formats/spreadsheet/spreadsheet-csv.ts';
import { listLedger, type ListLedger } from './list-ledger.ts';

const columns = ['no', 'time', 'kind', 'description', 'person', 'job id', 'lots', 'events'];
const amounts = ['available change', 'held change', 'spent change', 'available after', 'held after'];

export async function exportLedger(
  options: Omit<ListLedger, 'limit' | 'cursor'>,
): Promise<Result<{ filename: string; pieces: AsyncIterable<string> }>> {
  const first = await listLedger({ ...options, limit: limits.listPage });
  if (!first.ok) return first;
  async function* pieces(): AsyncIterable<string> {
    yield spreadsheetCsv([[...columns, ...amounts, 'sha-256']]);
    let page = first;
    for (;;) {
      if (!page.ok) throw new Error(`The ledger ended early: ${page.detail}`);
      yield spreadsheetCsv(
        page.value.entries.map((entry) => [
          entry.sequence,
          entry.occurredAt,
          entry.kind,
          entry.description,
          entry.person?.name ?? null,
          entry.jobId,
          entry.lotIds.join(' '),
          entry.events,
          ...[
            entry.availableChangeMicrocredits,
            entry.heldChangeMicrocredits,
            entry.spentChangeMicrocredits,
            entry.availableMicrocredits,
            entry.heldMicrocredits,
          ].map((microcredits) => scaledFigure(microcredits, 6)),
          entry.hash,
        ]),
      );
      const cursor = page.value.nextCursor;
      if (!cursor) return;
      page = await listLedger({ ...options, limit: limits.listPage, cursor });
    }
  }
  return accept({ filename: `ledger-${options.team}.csv`, pieces: pieces() });
}
