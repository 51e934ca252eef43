/** Sets a report as a tagged PDF: facts and final numbers first, then the figures, two to a page. */
import PDFDocument from 'pdfkit';
import { accent, ink, left, right, Sheet, soft } from '../pdf/sheet.ts';
import type { FontSet } from '../pdf/typeface.ts';
import type { Report } from './report.ts';

const top = 62;
const bottom = 770;
const width = right - left;

export async function writeReport(report: Report, fonts: FontSet): Promise<Buffer> {
  const date = new Date(report.date);
  const pdf = new PDFDocument({
    size: 'A4',
    margin: 0,
    pdfVersion: '1.7',
    tagged: true,
    lang: 'en-GB',
    displayTitle: true,
    info: { Title: report.title, Author: 'Burette', Subject: report.subtitle, CreationDate: date, ModDate: date },
  });
  const chunks: Buffer[] = [];
  const finished = new Promise<Buffer>((resolve, reject) => {
    pdf.on('data', (chunk: Buffer) => chunks.push(chunk));
    pdf.on('end', () => resolve(Buffer.concat(chunks)));
    pdf.on('error', reject);
  });
  new ReportPages(new Sheet(pdf, fonts), report).write();
  return finished;
}

class ReportPages {
  readonly #sheet: Sheet;
  readonly #report: Report;
  #page = 1;
  #y = top;

  constructor(sheet: Sheet, report: Report) {
    this.#sheet = sheet;
    this.#report = report;
  }

  write(): void {
    this.#head();
    this.#facts();
    this.#table();
    this.#figures();
    this.#sheet.foot(this.#foot());
    this.#sheet.end();
  }

  #foot = (): string => `${this.#report.title.slice(0, 80)} · page ${this.#page}`;

  /** Makes sure that `height` points are left on the page. */
  #need(height: number): void {
    if (this.#y + height <= bottom) return;
    this.#sheet.nextPage(this.#foot());
    this.#page++;
    this.#y = top;
  }

  #head(): void {
    const sheet = this.#sheet;
    sheet.text('Burette', { x: left, y: top, width, size: 13, weight: 'bold', colour: accent });
    this.#y = sheet.text(this.#report.title, { x: left, y: top + 30, width, size: 20, weight: 'bold', tag: 'H1' });
    this.#y = sheet.text(this.#report.subtitle, { x: left, y: this.#y, width, size: 11, colour: soft }) + 10;
    for (const notice of this.#report.notices)
      this.#y = sheet.text(notice, { x: left, y: this.#y, width, weight: 'bold' }) + 4;
    // Before the numbers, where it is read.
    this.#y = sheet.text(this.#report.caution, { x: left, y: this.#y, width, colour: soft, size: 8.5 }) + 12;
  }

  #facts(): void {
    for (const { label, value } of this.#report.facts) {
      this.#need(30);
      this.#sheet.text(label, { x: left, y: this.#y, width: 90, colour: soft });
      this.#y = this.#sheet.text(value, { x: left + 96, y: this.#y, width: width - 96 }) + 2;
    }
    this.#y += 12;
  }

  #table(): void {
    const { caption, columns, rows, note } = this.#report.table;
    const first = 120;
    const other = (width - first) / (columns.length - 1);
    const place = (column: number) =>
      column === 0
        ? { x: left, width: first - 8, align: 'left' as const }
        : { x: left + first + (column - 1) * other, width: other - 4, align: 'right' as const };
    const head = (): void => {
      const bottoms = columns.map((text, column) =>
        this.#sheet.text(text, { ...place(column), y: this.#y, size: 8, colour: soft, tag: 'TH' }),
      );
      this.#y = Math.max(...bottoms) + 2;
      this.#sheet.line(this.#y, ink);
      this.#y += 4;
    };
    this.#need(70);
    this.#y = this.#sheet.text(caption, { x: left, y: this.#y, width, size: 12, weight: 'bold', tag: 'H2' }) + 6;
    head();
    for (const row of rows) {
      const page = this.#page;
      this.#need(26);
      if (this.#page !== page) head();
      const bottoms = row.map((text, column) =>
        this.#sheet.text(text, { ...place(column), y: this.#y, size: 8.5, tag: column === 0 ? 'TH' : 'TD' }),
      );
      this.#y = Math.max(...bottoms) + 3;
    }
    if (note) this.#y = this.#sheet.text(note, { x: left, y: this.#y + 4, width, size: 8, colour: soft });
    this.#y += 14;
  }

  #figures(): void {
    for (const { svg, caption } of this.#report.figures) {
      this.#need(310);
      this.#y = this.#sheet.figure(svg, { x: left, y: this.#y, width, alternative: caption }) + 4;
      this.#y = this.#sheet.text(caption, { x: left, y: this.#y, width, size: 8.5, colour: soft }) + 16;
    }
  }
}
