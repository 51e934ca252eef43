/**
 * Reads XML into a small tree, refusing everything that a model file has no need of: document types, entities of its own,
 * deep nesting, great size. Runs in linear time and stops at the first fault.
 */
import { SaxesParser, type SaxesTagNS } from 'saxes';
import { limits } from '@/domain/limits.ts';

export interface XmlElement {
  /** Local name and namespace. */
  name: string;
  namespace: string;
  /** Attributes without a namespace. */
  attributes: ReadonlyMap<string, string>;
  /** Attributes with one, such as a package's `required`. */
  foreignAttributes: { name: string; namespace: string; value: string }[];
  children: XmlElement[];
  text: string;
  /** Of the opening tag, from 1. */
  line: number;
  column: number;
  /** For people: `sbml/model[cell]/listOfSpecies/species[A]`. */
  path: string;
  /** Namespace declared for each prefix on this element. */
  declared: Record<string, string>;
}

export interface XmlFault {
  code: string;
  message: string;
  line: number;
  column: number;
}

export type XmlOutcome = { ok: true; root: XmlElement } | { ok: false; fault: XmlFault };

/** A file of ten megabytes has fewer, unless it was made to hurt. */
const elementLimit = 1_000_000;
const noAttributes: ReadonlyMap<string, string> = new Map();

class Stop extends Error {
  constructor(readonly fault: XmlFault) {
    super(fault.message);
  }
}

/** The root element of `text`, or the first fault with its line and column. `skip` says whose content is not wanted. */
export function readXmlTree(text: string, skip: (element: XmlElement) => boolean = () => false): XmlOutcome {
  if (text.length > limits.modelBodyBytes) {
    const message = `The file has more than ${limits.modelBodyBytes.toLocaleString('en')} characters, the most a model file may have.`;
    return { ok: false, fault: { code: 'file_too_large', message, line: 1, column: 1 } };
  }
  try {
    return { ok: true, root: parse(text, skip) };
  } catch (error) {
    if (error instanceof Stop) return { ok: false, fault: error.fault };
    throw error;
  }
}

function parse(text: string, skip: (element: XmlElement) => boolean): XmlElement {
  const parser = new SaxesParser({ xmlns: true, position: true });
  const open: XmlElement[] = [];
  let root: XmlElement | null = null;
  let elements = 0;
  /** Depth inside a skipped element. */
  let skipped = 0;
  let start = { line: 1, column: 1 };
  const stop = (code: string, message: string): never => {
    throw new Stop({ code, message, line: parser.line, column: Math.max(1, parser.column) });
  };

  parser.on('error', (error) => stop('not_xml', `Not well-formed XML: ${readable(error.message)}.`));
  parser.on('doctype', () =>
    stop(
      'document_type_refused',
      'A document type (<!DOCTYPE …>) is refused: it can hide entities. Remove that line; SBML needs none.',
    ),
  );
  parser.on('opentagstart', (tag) => {
    start = { line: parser.line, column: Math.max(1, parser.column - tag.name.length - 1) };
  });
  parser.on('opentag', (tag) => {
    if (++elements > elementLimit)
      stop('too_many_elements', `More than ${elementLimit.toLocaleString('en')} elements.`);
    if (open.length + skipped >= limits.xmlDepth)
      stop('nested_too_deep', `Elements nest more than ${limits.xmlDepth} deep.`);
    if (skipped > 0) {
      skipped++;
      return;
    }
    const parent = open.at(-1);
    const element = elementOf(tag, parent, start);
    parent?.children.push(element);
    // Texts around a child are two texts: `1<sep/>5` is “1 5”.
    if (parent !== undefined && parent.text !== '') parent.text += ' ';
    root ??= element;
    if (skip(element)) skipped = 1;
    else open.push(element);
  });
  parser.on('closetag', () => {
    if (skipped > 0) skipped--;
    else open.pop();
  });
  const addText = (characters: string) => {
    const element = open.at(-1);
    if (skipped === 0 && element !== undefined) element.text += characters;
  };
  parser.on('text', addText);
  parser.on('cdata', addText);

  parser.write(text).close();
  return root ?? stop('not_xml', 'The file holds no XML element.');
}

function elementOf(
  tag: SaxesTagNS,
  parent: XmlElement | undefined,
  start: { line: number; column: number },
): XmlElement {
  const attributes = new Map<string, string>();
  const foreignAttributes: XmlElement['foreignAttributes'] = [];
  for (const { name, local, uri, prefix, value } of Object.values(tag.attributes)) {
    if (name === 'xmlns' || prefix === 'xmlns') continue;
    if (uri === '') attributes.set(local, value);
    else foreignAttributes.push({ name: local, namespace: uri, value });
  }
  const label =
    attributes.get('id') ?? attributes.get('variable') ?? attributes.get('symbol') ?? attributes.get('species');
  const step = label === undefined ? tag.local : `${tag.local}[${label.slice(0, limits.identifierCharacters)}]`;
  return {
    name: tag.local,
    namespace: tag.uri,
    attributes: attributes.size === 0 ? noAttributes : attributes,
    foreignAttributes,
    children: [],
    text: '',
    ...start,
    path: parent === undefined ? step : `${parent.path}/${step}`,
    declared: tag.ns,
  };
}

/** The parser's words without its own position, which the problem states anyway, and without a final stop. */
function readable(message: string): string {
  return message.replace(/^(?:[^:]*:)?\d+:\d+:\s*/, '').replace(/\.$/, '');
}
