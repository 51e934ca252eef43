/** Sets an invoice, credit note or pro-forma as a tagged PDF: one A4 page in the common case, more for long ones. */
import PDFDocument from 'pdfkit';
import { rateText, type Party } from '@/domain/billing/invoice-face.ts';
import { dayText, moneyText } from '@/domain/billing/money-text.ts';
import { accent, ink, left, right, Sheet, soft } from '../pdf/sheet.ts';
import type { FontSet, Weight } from '../pdf/typeface.ts';
import type { PrintedDocument } from './printed-document.ts';

/** Where text ends on a page; below stands its foot. */
const bottom = 720;
const topOfNextPages = 100;

export async function writePdf(document: PrintedDocument, fonts: FontSet): Promise<Buffer> {
  const { title, number, issuedAt, face } = document;
  const created = new Date(issuedAt);
  const pdf = new PDFDocument({
    size: 'A4',
    margin: 0,
    pdfVersion: '1.7',
    tagged: true,
    lang: 'en-GB',
    displayTitle: true,
    // Feet name the number of pages, which is known at the end.
    bufferPages: true,
    info: {
      Title: `${title} ${number}`,
      Author: face.seller.name,
      Subject: face.lines.map(({ description }) => description).join('; '),
      CreationDate: created,
      ModDate: created,
    },
  });
  const chunks: Buffer[] = [];
  const finished = new Promise<Buffer>((resolve, reject) => {
    pdf.on('data', (chunk: Buffer) => chunks.push(chunk));
    pdf.on('end', () => resolve(Buffer.concat(chunks)));
    pdf.on('error', reject);
  });
  const sheet = new Sheet(pdf, fonts);
  /** Answers where to go on: at `y` when `height` points fit below it, or else on another page. */
  const room: Room = (y, height) => {
    if (y + height <= bottom) return y;
    pdf.addPage();
    sheet.artifact(`${title} ${number}, continued`, { x: left, y: 62, size: 9 });
    return topOfNextPages;
  };
  let y = writeHead(sheet, document);
  y = writeParties(sheet, document, y);
  y = writeLines(sheet, document, y, room);
  y = writeTotals(sheet, document, y, room);
  writeNotes(sheet, document, y, room);
  const { count } = pdf.bufferedPageRange();
  for (let page = 0; page < count; page++) {
    pdf.switchToPage(page);
    writeFoot(sheet, document, `Page ${page + 1} of ${count}.`);
  }
  sheet.end();
  return finished;
}

type Room = (y: number, height: number) => number;

function writeHead(sheet: Sheet, { title, number }: PrintedDocument): number {
  sheet.text('Burette', { x: left, y: 62, width: 200, size: 13, weight: 'bold', colour: accent });
  const y = sheet.text(title, { x: left, y: 96, width: 300, size: 24, weight: 'bold', tag: 'H1' });
  return sheet.text(number, { x: left, y: y - 2, width: 300, size: 13, colour: soft }) + 14;
}

function writeParties(sheet: Sheet, { face, facts }: PrintedDocument, top: number): number {
  const party = (label: string, { name, address, country, vatNumber }: Party, x: number): number => {
    let y = sheet.text(label, { x, y: top, width: 150, size: 8, colour: soft, tag: 'H2' });
    y = sheet.text(name, { x, y, width: 150, weight: 'bold' });
    if (address) y = sheet.text(address, { x, y, width: 150 });
    y = sheet.text(countryName(country), { x, y, width: 150 });
    return vatNumber ? sheet.text(`VAT number ${vatNumber}`, { x, y, width: 150 }) : y;
  };
  let factsBottom = top;
  for (const { label, value } of facts) {
    factsBottom = sheet.text(label, { x: 398, y: factsBottom, width: 135, size: 8, colour: soft });
    factsBottom = sheet.text(value, { x: 398, y: factsBottom - 1, width: 135 }) + 3;
  }
  return Math.max(party('Seller', face.seller, left), party('Buyer', face.buyer, 230), factsBottom) + 20;
}

const countryNames = new Intl.DisplayNames('en', { type: 'region' });
const countryName = (code: string): string => (/^[A-Z]{2}$/.test(code) ? (countryNames.of(code) ?? code) : code);

function writeLineHead(sheet: Sheet, top: number): number {
  const small = { size: 8, colour: soft, tag: 'TH' as const };
  sheet.text('Description', { x: left, y: top, width: 240, ...small });
  sheet.text('Quantity', { x: 300, y: top, width: 60, align: 'right', ...small });
  sheet.text('Unit price', { x: 365, y: top, width: 80, align: 'right', ...small });
  return sheet.text('Net', { x: 450, y: top, width: 83, align: 'right', ...small }) + 2;
}

function writeLines(sheet: Sheet, { face }: PrintedDocument, top: number, room: Room): number {
  let y = writeLineHead(sheet, room(top, 60));
  for (const { description, quantity, unit, netMinor } of face.lines) {
    const next = room(y, 10 + sheet.heightOf(description, { width: 235 }));
    y = next === y ? y : writeLineHead(sheet, next);
    sheet.line(y);
    y += 6;
    sheet.text(`${quantity} ${unit}`, { x: 300, y, width: 60, align: 'right', tag: 'TD' });
    sheet.text(moneyText(netMinor / quantity, face.currency), { x: 365, y, width: 80, align: 'right', tag: 'TD' });
    sheet.text(moneyText(netMinor, face.currency), { x: 450, y, width: 83, align: 'right', tag: 'TD' });
    y = sheet.text(description, { x: left, y, width: 235, tag: 'TD' }) + 4;
  }
  sheet.line(y, ink, 1);
  return y + 8;
}

function writeTotals(sheet: Sheet, { face }: PrintedDocument, top: number, room: Room): number {
  const { currency } = face;
  let y = room(top, 50 + 16 * face.taxes.length);
  const row = (label: string, amountMinor: number, weight: Weight = 'regular', size = 9) => {
    sheet.text(moneyText(amountMinor, currency), { x: 420, y, width: 113, align: 'right', weight, size, tag: 'TD' });
    y = sheet.text(label, { x: 230, y, width: 190, weight, size, tag: 'TD' }) + 3;
  };
  row('Net', face.netMinor);
  for (const { category, rateHundredths, baseMinor, taxMinor } of face.taxes)
    row(
      category === 'S' ? `VAT ${rateText(rateHundredths)} on ${moneyText(baseMinor, currency)}` : 'VAT 0 %',
      taxMinor,
    );
  y += 2;
  row('Total', face.totalMinor, 'bold', 12);
  return y + 16;
}

function writeNotes(sheet: Sheet, { face, standing }: PrintedDocument, top: number, room: Room): void {
  const width = right - left;
  const y = room(top, sheet.heightOf(standing, { width, weight: 'bold' }));
  let bottomOfNote = sheet.text(standing, { x: left, y, width, weight: 'bold' }) + 8;
  for (const note of face.notes) {
    const place = room(bottomOfNote, sheet.heightOf(note, { width }));
    bottomOfNote = sheet.text(note, { x: left, y: place, width, colour: soft }) + 3;
  }
}

/** Stands on every page, outside the text that a reader hears. */
function writeFoot(sheet: Sheet, { cautions, issuedAt }: PrintedDocument, page: string): void {
  sheet.line(742);
  let y = 750;
  for (const caution of [...cautions, `Issued ${dayText(issuedAt)}. ${page}`])
    y = sheet.artifact(caution, { x: left, y }) + 1;
}
