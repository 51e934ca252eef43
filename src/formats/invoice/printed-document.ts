/** What is printed of an invoice, credit note or pro-forma, whatever the paper. */
import type { InvoiceFace } from '@/domain/billing/invoice-face.ts';

export interface PrintedDocument {
  title: 'Invoice' | 'Credit note' | 'Pro-forma';
  number: string;
  /** RFC 3339; also the creation date in the file's metadata, so that the same document gives the same bytes. */
  issuedAt: string;
  /** Rows beside the parties, such as date of issue and tax point. */
  facts: { label: string; value: string }[];
  face: InvoiceFace;
  /** How it stands, such as `Paid by card on 1 December 2026.` */
  standing: string;
  /** Small print at the end. */
  cautions: string[];
}
