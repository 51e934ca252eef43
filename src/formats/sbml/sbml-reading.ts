/** What the parts of the SBML reader share: the problems found so far, and strict reading of attributes and children. */
import type { Problem } from '@/domain/network/document.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { MathFault, readMathml, type FunctionDefinition } from './read-mathml.ts';
import { mathmlNamespace, type SbmlVersion } from './sbml-names.ts';
import type { XmlElement } from './xml-tree.ts';

/** What the person has agreed to; without it, each is an error that offers it. */
export interface ReadSbmlOptions {
  /** Round initial amounts that are not whole to the nearest count. */
  roundInitialCounts?: boolean | undefined;
  /** Split a reversible reaction with a law “forward − backward” into two reactions. */
  splitReversible?: boolean | undefined;
}

export class SbmlReading {
  readonly problems: Problem[] = [];
  readonly notes: Problem[] = [];
  readonly functions = new Map<string, FunctionDefinition>();

  constructor(
    readonly version: SbmlVersion,
    readonly namespace: string,
    readonly options: ReadSbmlOptions,
  ) {}

  /** An error at `element`: the file cannot be used until it is mended. */
  refuse(element: XmlElement, code: string, message: string): void {
    this.problems.push(problemAt('error', element, code, message));
  }

  warn(element: XmlElement, code: string, message: string): void {
    this.notes.push(problemAt('warning', element, code, message));
  }

  inform(element: XmlElement, code: string, message: string): void {
    this.notes.push(problemAt('information', element, code, message));
  }

  /** The children of the list `name` inside `parent`, each an `item`; anything else in the list is refused. */
  list(parent: XmlElement, name: string, ...items: string[]): XmlElement[] {
    return parent.children
      .filter((child) => child.name === name && child.namespace === this.namespace)
      .flatMap((list) =>
        list.children.filter((child) => {
          if (child.namespace !== this.namespace || child.name === 'notes' || child.name === 'annotation') return false;
          if (!items.includes(child.name))
            this.refuse(child, 'unexpected_element', `<${child.name}> has no place in <${name}>.`);
          return items.includes(child.name);
        }),
      );
  }

  child(parent: XmlElement, name: string): XmlElement | undefined {
    return parent.children.find((child) => child.name === name && child.namespace === this.namespace);
  }

  /** A required attribute's text; '' after a refusal. */
  required(element: XmlElement, name: string): string {
    const text = element.attributes.get(name)?.trim() ?? '';
    if (text === '') this.refuse(element, 'missing_attribute', `<${element.name}> needs the attribute ${name}.`);
    return text;
  }

  boolean(element: XmlElement, name: string, whenAbsent: boolean): boolean {
    const text = element.attributes.get(name)?.trim();
    if (text === undefined) return whenAbsent;
    if (text === 'true' || text === '1') return true;
    if (text !== 'false' && text !== '0') {
      this.refuse(element, 'invalid_attribute', `${name}="${text.slice(0, 50)}" is neither true nor false.`);
    }
    return false;
  }

  /** A finite number; null when absent; NaN after a refusal. */
  number(element: XmlElement, name: string): number | null {
    const text = element.attributes.get(name)?.trim();
    if (text === undefined) return null;
    const value = /^[-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?$/.test(text) ? Number(text) : NaN;
    if (Number.isFinite(value)) return value;
    this.refuse(element, 'invalid_attribute', `${name}="${text.slice(0, 50)}" is not a finite number.`);
    return NaN;
  }

  /** The expression in the `<math>` of `element`; null after a refusal. */
  math(element: XmlElement): Expression | null {
    const math = element.children.find(({ name, namespace }) => name === 'math' && namespace === mathmlNamespace);
    if (math === undefined) {
      this.refuse(element, 'missing_math', `<${element.name}> has no <math>.`);
      return null;
    }
    return this.guarded(() => readMathml(math, this.functions));
  }

  /** What `read` returns; null when it met a fault in the mathematics, which is refused where it is. */
  guarded<T>(read: () => T): T | null {
    try {
      return read();
    } catch (fault) {
      if (!(fault instanceof MathFault)) throw fault;
      this.refuse(fault.element, fault.code, fault.message);
      return null;
    }
  }
}

function problemAt(severity: Problem['severity'], element: XmlElement, code: string, message: string): Problem {
  return { severity, path: element.path, code, message: `${message} (line ${element.line}, column ${element.column})` };
}
