/** Invoices as one zip: PDF and UBL of each, and the list as CSV. */
import { randomUUID } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { mkdir, rm } from 'node:fs/promises';
import path from 'node:path';
import { Readable } from 'node:stream';
import type { InvoiceFilters } from '@/contracts/invoices.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { ZipWriter } from '@/formats/zip/zip-writer.ts';
import { env } from '../env.ts';
import { authorise } from '../teams/authorise.ts';
import { downloadInvoiceUbl } from './download-invoice-ubl.ts';
import { exportInvoices } from './export-invoices.ts';
import { printInvoice } from './print-invoice.ts';
import { selectInvoices } from './select-invoices.ts';

/** The zip is written to a file of its own, so that memory does not grow with it; the file goes when it has been sent. */
export async function downloadInvoices(
  options: { actor: Actor; team: string } & InvoiceFilters,
): Promise<Result<{ filename: string; bytes: number; stream: ReadableStream<Uint8Array> }>> {
  const { actor, team, ...filters } = options;
  const authorised = await authorise({ actor, team, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const count = limits.invoicesPerZip + 1;
  const invoices = await selectInvoices({ team: authorised.value.team, filters, count });
  if (invoices.length === count)
    return refuse(
      'too_large',
      `One download holds up to ${limits.invoicesPerZip} invoices. Narrow the dates and download twice.`,
    );
  const folder = path.join(env().BURETTE_DATA_DIR, 'downloads');
  await mkdir(folder, { recursive: true });
  const file = path.join(folder, `${randomUUID()}.zip`);
  const zip = await ZipWriter.create(file);
  try {
    const list = await exportInvoices(options);
    if (list.ok) await zip.add('invoices.csv', list.value.pieces);
    for (const invoice of invoices) {
      await zip.add(`${invoice.number}.pdf`, [await printInvoice(invoice)]);
      const ubl = await downloadInvoiceUbl({ actor, team, invoiceId: invoice.id });
      if (ubl.ok) await zip.add(`${invoice.number}.xml`, [ubl.value.content]);
    }
    const { bytes } = await zip.end();
    const source = createReadStream(file);
    source.once('close', () => void rm(file, { force: true }));
    const stream = Readable.toWeb(source) as ReadableStream<Uint8Array>;
    return accept({ filename: `invoices-${team}.zip`, bytes, stream });
  } catch (error) {
    await zip.abandon();
    throw error;
  }
}
