/** Text in a PDF from several fonts: each character is set in the first font that has it. */

/** Font files (WOFF or TTF) in order of preference; the first has the basic Latin alphabet. */
export interface FontSet {
  regular: Buffer[];
  bold: Buffer[];
}
export type Weight = keyof FontSet;

/** The font that the library has open; its types leave it out. */
interface WithOpenFont {
  _font: { font: { hasGlyphForCodePoint(codePoint: number): boolean } };
}

interface Face {
  name: string;
  has: (codePoint: number) => boolean;
}

export class Typeface {
  readonly #faces: Record<Weight, Face[]>;

  constructor(document: PDFKit.PDFDocument, fonts: FontSet) {
    const register = (weight: Weight) =>
      fonts[weight].map((file, place) => {
        const name = `${weight}-${place}`;
        document.registerFont(name, file);
        const { font } = (document.font(name) as unknown as WithOpenFont)._font;
        return { name, has: (codePoint: number) => font.hasGlyphForCodePoint(codePoint) };
      });
    this.#faces = { regular: register('regular'), bold: register('bold') };
  }

  /** Name of the first font of a weight. */
  main(weight: Weight): string {
    return this.#faces[weight][0]?.name ?? '';
  }

  /** The text cut into runs of one font each. A character that no font has becomes a question mark. */
  runs(text: string, weight: Weight): { font: string; text: string }[] {
    const faces = this.#faces[weight];
    const runs: { font: string; text: string }[] = [];
    for (const character of text.normalize('NFC')) {
      const codePoint = character.codePointAt(0) ?? 0;
      const face = faces.find(({ has }) => has(codePoint));
      const font = face?.name ?? this.main(weight);
      const shown = face ? character : '?';
      const last = runs.at(-1);
      if (last?.font === font) last.text += shown;
      else runs.push({ font, text: shown });
    }
    return runs;
  }
}
