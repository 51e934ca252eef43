/** A sheet of tagged A4 paper: paragraphs, rules and figures at given places, in one typeface. */
import { drawSvg } from './draw-svg.ts';
import { Typeface, type FontSet, type Weight } from './typeface.ts';

/** Edges of the text and colours, as on every paper of ours. */
export const left = 62;
export const right = 533;
export const ink = '#13212B';
export const soft = '#4B5C69';
export const rule = '#CBD7DE';
export const accent = '#B8105A';
/** Figures of one width, so that columns of amounts align. */
const figures: PDFKit.Mixins.OpenTypeFeatures[] = ['tnum'];

export interface TextOptions {
  x: number;
  y: number;
  width: number;
  size?: number;
  weight?: Weight;
  colour?: string;
  align?: 'left' | 'right';
  /** Structure type in the tagged file. */
  tag?: 'H1' | 'H2' | 'P' | 'TH' | 'TD';
}

export class Sheet {
  readonly #document: PDFKit.PDFDocument;
  readonly #type: Typeface;
  readonly #root: PDFKit.PDFStructureElement;

  constructor(document: PDFKit.PDFDocument, fonts: FontSet) {
    this.#document = document;
    this.#type = new Typeface(document, fonts);
    this.#root = document.struct('Document');
    document.addStructure(this.#root);
  }

  /** Writes a paragraph, wrapped to `width`; answers where the next line begins. */
  text(text: string, options: TextOptions): number {
    const { x, y, width, size = 9, weight = 'regular', colour = ink, align = 'left', tag = 'P' } = options;
    const document = this.#document;
    const lineHeight = size * 1.45;
    let bottom = y;
    this.#root.add(
      document.struct(tag, {}, () => {
        for (const line of text.split('\n').flatMap((paragraph) => this.#wrap(paragraph, width, size, weight))) {
          const runs = this.#type.runs(line, weight);
          let place = align === 'right' ? x + width - this.#widthOf(line, size, weight) : x;
          for (const run of runs) {
            document
              .font(run.font)
              .fontSize(size)
              .fillColor(colour)
              .text(run.text, place, bottom, { lineBreak: false, features: figures });
            place += document.font(run.font).fontSize(size).widthOfString(run.text, { features: figures });
          }
          bottom += lineHeight;
        }
      }),
    );
    return bottom;
  }

  /** Height in points of a paragraph as `text` would write it. */
  heightOf(text: string, { width, size = 9, weight = 'regular' }: Omit<TextOptions, 'x' | 'y'>): number {
    return text.split('\n').flatMap((paragraph) => this.#wrap(paragraph, width, size, weight)).length * size * 1.45;
  }

  line(y: number, colour = rule, width = 0.75): void {
    this.#document.markContent('Artifact');
    this.#document.moveTo(left, y).lineTo(right, y).lineWidth(width).strokeColor(colour).stroke();
    this.#document.endMarkedContent();
  }

  /** Draws an SVG figure; `alternative` says it in words. Answers where it ends. */
  figure(svg: string, options: { x: number; y: number; width: number; alternative: string }): number {
    let bottom = options.y;
    const draw = (): void => void (bottom += drawSvg(this.#document, this.#type, svg, options));
    this.#root.add(this.#document.struct('Figure', { alt: options.alternative }, draw));
    return bottom;
  }

  /** Begins another page; `foot` stands at the bottom of the one that ends. */
  nextPage(foot: string): void {
    this.foot(foot);
    this.#document.addPage();
  }

  /** A line at the foot of the page, not part of the text. */
  foot(text: string): void {
    this.artifact(text, { x: left, y: 800 });
  }

  /** Writes what stands on pages without being part of the text, wrapped to the page; answers where the next line begins. */
  artifact(text: string, { x, y, size = 7.5 }: { x: number; y: number; size?: number }): number {
    let bottom = y;
    this.#document.markContent('Artifact');
    for (const line of this.#wrap(text, right - x, size, 'regular')) {
      let place = x;
      for (const run of this.#type.runs(line, 'regular')) {
        this.#document
          .font(run.font)
          .fontSize(size)
          .fillColor(soft)
          .text(run.text, place, bottom, { lineBreak: false });
        place += this.#document.widthOfString(run.text);
      }
      bottom += size * 1.45;
    }
    this.#document.endMarkedContent();
    return bottom;
  }

  end(): void {
    this.#root.end();
    this.#document.end();
  }

  #widthOf(text: string, size: number, weight: Weight): number {
    return this.#type
      .runs(text, weight)
      .reduce(
        (sum, run) => sum + this.#document.font(run.font).fontSize(size).widthOfString(run.text, { features: figures }),
        0,
      );
  }

  /** Breaks at spaces, and inside a word only when it alone is wider than the column. */
  #wrap(paragraph: string, width: number, size: number, weight: Weight): string[] {
    const lines: string[] = [];
    const space = this.#widthOf(' ', size, weight);
    let line = '';
    let lineWidth = 0;
    for (const word of paragraph.split(' ')) {
      const wordWidth = this.#widthOf(word, size, weight);
      if (line !== '' && lineWidth + space + wordWidth <= width) {
        line += ` ${word}`;
        lineWidth += space + wordWidth;
        continue;
      }
      if (line !== '') lines.push(line);
      [line, lineWidth] = [word, wordWidth];
      while (lineWidth > width) {
        let count = line.length - 1;
        while (count > 1 && this.#widthOf(line.slice(0, count), size, weight) > width) count -= 1;
        lines.push(line.slice(0, count));
        line = line.slice(count);
        lineWidth = this.#widthOf(line, size, weight);
      }
    }
    return [...lines, line];
  }
}
