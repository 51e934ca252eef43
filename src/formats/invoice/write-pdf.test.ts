/** The paper of an invoice: one page in the common case, as many as it needs otherwise, the same bytes every time. */
import { readFile } from 'node:fs/promises';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { composeFace, type InvoiceFace } from '@/domain/billing/invoice-face.ts';
import { writePdf } from './write-pdf.ts';

const font = (weight: number) =>
  readFile(path.resolve(`node_modules/@fontsource/manrope/files/manrope-latin-${weight}-normal.woff`));
const fonts = async () => ({ regular: [await font(400)], bold: [await font(700)] });

const face = composeFace({
  seller: { name: 'Burette & Co', address: '1 Quay\nTown T1 1TT', country: 'GB', vatNumber: 'GB999999973' },
  buyer: { name: 'Tarn', address: 'Ufer 1\nBerlin\nHaus B', country: 'DE', vatNumber: 'DE136695976' },
  credits: 100,
  creditsMicrocredits: 100_000_000,
  netMinor: 9_505,
  currency: 'EUR',
  tax: { category: 'S', rateHundredths: 1_900, country: 'DE', note: null },
  purchaseOrder: 'PO & 7',
});

const paper = async (more: Partial<InvoiceFace> = {}): Promise<Buffer> =>
  writePdf(
    {
      title: 'Invoice',
      number: 'BUR-2026-00007',
      issuedAt: '2026-12-01T10:00:00.000Z',
      facts: [{ label: 'Date of issue', value: '1 December 2026' }],
      face: { ...face, ...more },
      standing: 'Paid through the payment service on 1 December 2026. Nothing is due.',
      cautions: ['Tax treatment shown is configuration, not advice.'],
    },
    await fonts(),
  );

/** Page objects stand uncompressed in files of this version. */
const pages = (pdf: Buffer): number => pdf.toString('latin1').match(/\/Type \/Page\n/g)?.length ?? 0;

describe('the paper of an invoice', () => {
  it('is one page, tagged, with its title and language', async () => {
    const pdf = await paper();
    expect(pages(pdf)).toBe(1);
    const text = pdf.toString('latin1');
    for (const part of [
      '/MarkInfo',
      '/Lang (en-GB)',
      '/DisplayDocTitle true',
      '<rdf:li xml:lang="x-default">Invoice BUR-2026-00007</rdf:li>',
    ])
      expect(text).toContain(part);
    expect(await paper()).toEqual(pdf);
  });

  it('goes on to further pages when there are many lines or long notes', async () => {
    const [line] = face.lines;
    expect(pages(await paper({ lines: Array.from({ length: 60 }, () => line!) }))).toBe(3);
    expect(pages(await paper({ notes: Array.from({ length: 40 }, () => 'A long remark. '.repeat(12)) }))).toBe(3);
  });
});
