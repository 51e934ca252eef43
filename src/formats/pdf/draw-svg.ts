/**
 * Draws one of our own SVG figures on a PDF page, as vectors. It knows the elements that the figures consist of: rectangles,
 * paths, polygons, text, groups with a clip path; others are left out.
 */
import { SaxesParser } from 'saxes';
import type { Typeface } from './typeface.ts';

interface Element {
  name: string;
  attributes: Record<string, string>;
  children: Element[];
  text: string;
}

/** Draws `svg` with its upper left corner at x, y; answers its height. All lengths in points. */
export function drawSvg(
  document: PDFKit.PDFDocument,
  typeface: Typeface,
  svg: string,
  place: { x: number; y: number; width: number },
): number {
  const root = parse(svg);
  const [width, height] = ['width', 'height'].map((name) => Number(root.attributes[name])) as [number, number];
  const scale = place.width / width;
  const clips = new Map<string, string>();
  collectClips(root, clips);
  document.save().translate(place.x, place.y).scale(scale);
  for (const child of root.children) draw({ document, typeface, clips }, child);
  document.restore();
  return height * scale;
}

/** What is drawn; other elements are passed over. */
export const drawnElements = ['g', 'text', 'rect', 'path', 'polygon', 'polyline'] as const;

interface Drawing {
  document: PDFKit.PDFDocument;
  typeface: Typeface;
  clips: Map<string, string>;
}

function draw(drawing: Drawing, element: Element): void {
  const { document, clips } = drawing;
  const { name, attributes } = element;
  if (name === 'defs') return;
  document.save();
  transform(document, attributes['transform']);
  if (name === 'g') {
    const clip = clips.get(/^url\(#(.+)\)$/.exec(attributes['clip-path'] ?? '')?.[1] ?? '');
    if (clip) document.path(clip).clip();
    for (const child of element.children) draw(drawing, child);
  } else if (name === 'text') drawText(drawing, element);
  else drawShape(document, element);
  document.restore();
}

function drawShape(document: PDFKit.PDFDocument, { name, attributes }: Element): void {
  const number = (attribute: string): number => Number(attributes[attribute] ?? 0);
  if (name === 'rect') document.rect(number('x'), number('y'), number('width'), number('height'));
  else if (name === 'path') document.path(attributes['d']!);
  else if (name === 'polygon' || name === 'polyline') {
    const [first, ...others] = pointsOf(attributes['points']!);
    if (!first) return;
    document.moveTo(...first);
    for (const point of others) document.lineTo(...point);
    if (name === 'polygon') document.closePath();
  } else return;
  paint(document, attributes);
}

function paint(document: PDFKit.PDFDocument, attributes: Record<string, string>): void {
  const { fill = '#000000', stroke = 'none' } = attributes;
  const dashes = attributes['stroke-dasharray']?.split(/[ ,]+/).map(Number);
  if (dashes && dashes.length > 0) document.dash(dashes[0]!, { space: dashes[1] ?? dashes[0]! });
  const [filled, stroked] = [fill, stroke].map((colour) => colour !== 'none' && colour !== 'transparent');
  const opacity = Number(attributes['opacity'] ?? 1);
  if (filled) document.fillColor(fill, opacity * Number(attributes['fill-opacity'] ?? 1));
  if (stroked)
    document
      .lineWidth(Number(attributes['stroke-width'] ?? 1))
      .lineJoin(
        attributes['stroke-linejoin'] === 'round'
          ? 'round'
          : attributes['stroke-linejoin'] === 'bevel'
            ? 'bevel'
            : 'miter',
      )
      .strokeColor(stroke, opacity * Number(attributes['stroke-opacity'] ?? 1));
  if (filled && stroked) document.fillAndStroke();
  else if (filled) document.fill();
  else if (stroked) document.stroke();
}

function drawText({ document, typeface }: Drawing, { attributes, text }: Element): void {
  const size = Number(/font-size:([\d.]+)px/.exec(attributes['style'] ?? '')?.[1] ?? 12);
  const runs = typeface.runs(text, /font-weight:(bold|[6-9]00)/.test(attributes['style'] ?? '') ? 'bold' : 'regular');
  const widths = runs.map((run) => document.font(run.font).fontSize(size).widthOfString(run.text));
  const width = widths.reduce((sum, value) => sum + value, 0);
  const anchor = { start: 0, middle: width / 2, end: width }[attributes['text-anchor'] ?? 'start'] ?? 0;
  let x = Number(attributes['x'] ?? 0) - anchor;
  const baseline = attributes['dominant-baseline'] === 'central' ? 'svg-central' : 'alphabetic';
  document.fillColor(attributes['fill'] ?? '#000000', 1);
  runs.forEach((run, i) => {
    document
      .font(run.font)
      .fontSize(size)
      .text(run.text, x, Number(attributes['y'] ?? 0), { lineBreak: false, baseline });
    x += widths[i]!;
  });
}

function transform(document: PDFKit.PDFDocument, text: string | undefined): void {
  for (const [, name, list] of (text ?? '').matchAll(/(translate|matrix|rotate|scale)\(([^)]*)\)/g)) {
    const values = list!.trim().split(/[ ,]+/).map(Number) as [number, number, number, number, number, number];
    if (name === 'translate') document.translate(values[0], values[1] ?? 0);
    if (name === 'matrix') document.transform(...values);
    if (name === 'rotate') document.rotate(values[0]);
    if (name === 'scale') document.scale(values[0], values[1] ?? values[0]);
  }
}

const pointsOf = (text: string): [number, number][] => {
  const values = text.trim().split(/[ ,]+/).map(Number);
  return Array.from({ length: values.length >> 1 }, (_, i) => [values[2 * i]!, values[2 * i + 1]!]);
};

function collectClips(element: Element, clips: Map<string, string>): void {
  const [shape] = element.children;
  if (element.name === 'clipPath' && shape?.name === 'path')
    clips.set(element.attributes['id']!, shape.attributes['d']!);
  for (const child of element.children) collectClips(child, clips);
}

function parse(svg: string): Element {
  const root: Element = { name: '', attributes: {}, children: [], text: '' };
  const open = [root];
  const parser = new SaxesParser();
  parser.on('opentag', ({ name, attributes }) => {
    const element = { name, attributes: attributes as Record<string, string>, children: [], text: '' };
    open.at(-1)!.children.push(element);
    open.push(element);
  });
  parser.on('text', (text) => void (open.at(-1)!.text += text));
  parser.on('closetag', () => void open.pop());
  parser.write(svg).close();
  return root.children[0]!;
}
