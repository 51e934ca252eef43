/** Reads MathML as SBML uses it into an expression; what the expression language cannot say is refused by name. */
import { limits } from '@/domain/limits.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { leavesOf, mapLeaves } from '@/domain/network/expression-leaves.ts';
import { binary, call, constants, number, operators, undefinedValue } from './mathml-operators.ts';
import { mathmlNamespace } from './sbml-names.ts';
import type { XmlElement } from './xml-tree.ts';

export interface FunctionDefinition {
  parameters: string[];
  body: Expression;
}

/** What is wrong, and the element where it is. */
export class MathFault extends Error {
  constructor(
    readonly element: XmlElement,
    readonly code: string,
    message: string,
  ) {
    super(message);
  }
}

/** More could not be stored: an expression's text has at most `limits.expressionCharacters`, four or more to a leaf. */
const leavesMost = limits.expressionCharacters / 4;
const elementsMost = 3 * leavesMost;

/** As SBML Level 3 defines its symbol (value of CODATA 2006, kept by the specification; from memory). */
const avogadro = 6.02214179e23;

/** The symbol “time” in an expression that was read; no name of a file is written like this. See time-switches.ts. */
export const timeId = '#time';

const symbolAdvice: Record<string, string> = {
  delay:
    'The symbol “delay” is not supported: the state must not depend on the past. Model the delay as a chain of intermediate species.',
  rateOf: 'The symbol “rateOf” is not supported: counts change by jumps and have no rate. Write the law out.',
};

/**
 * The expression inside a `<math>` element, names as symbols, functions inlined. Throws `MathFault`.
 * `functions` are those defined so far.
 */
export function readMathml(
  math: XmlElement,
  functions: ReadonlyMap<string, FunctionDefinition> = new Map(),
): Expression {
  return readMathElement(only(math), functions);
}

/** One element inside a `<math>`, as `readMathml` reads the whole. */
export function readMathElement(element: XmlElement, functions: ReadonlyMap<string, FunctionDefinition>): Expression {
  checkSize(element);
  return read(element, functions);
}

function checkSize(math: XmlElement): void {
  const waiting = [math];
  for (let seen = 0, next = waiting.pop(); next !== undefined; next = waiting.pop()) {
    if (++seen > elementsMost)
      throw new MathFault(
        math,
        'math_too_large',
        `An expression has at most ${elementsMost} elements; split it with assignment rules.`,
      );
    waiting.push(...next.children);
  }
}

/** A `<lambda>`: its parameters and body. Throws `MathFault`. */
export function readLambda(math: XmlElement, functions: ReadonlyMap<string, FunctionDefinition>): FunctionDefinition {
  checkSize(math);
  const lambda = withoutSemantics(only(math));
  if (lambda.name !== 'lambda')
    throw new MathFault(lambda, 'function_without_lambda', `A function is a <lambda>, not <${lambda.name}>.`);
  const bound = lambda.children.filter(({ name }) => name === 'bvar');
  const rest = lambda.children.filter(({ name }) => name !== 'bvar');
  if (rest.length !== 1)
    throw new MathFault(lambda, 'function_without_body', 'A <lambda> has one expression after its <bvar>s.');
  return { parameters: bound.map((bvar) => only(bvar).text.trim()), body: read(rest[0]!, functions) };
}

function only(parent: XmlElement): XmlElement {
  const [first, second] = parent.children;
  if (first === undefined) throw new MathFault(parent, 'empty_math', `<${parent.name}> is empty.`);
  if (second !== undefined)
    throw new MathFault(
      second,
      'too_much_math',
      `<${parent.name}> holds one expression; <${second.name}> is a second one.`,
    );
  return first;
}

function withoutSemantics(element: XmlElement): XmlElement {
  return element.name === 'semantics' && element.children[0] !== undefined ? element.children[0] : element;
}

function read(wrapped: XmlElement, functions: ReadonlyMap<string, FunctionDefinition>): Expression {
  const element = withoutSemantics(wrapped);
  if (element.namespace !== mathmlNamespace) {
    throw new MathFault(element, 'not_mathml', `<${element.name}> is not in the namespace of MathML.`);
  }
  const constant = constants.get(element.name);
  if (constant !== undefined) return constant;
  switch (element.name) {
    case 'cn':
      return readNumber(element);
    case 'ci':
      return { kind: 'symbol', id: element.text.trim() };
    case 'csymbol':
      return readSymbol(element);
    case 'apply':
      return readApply(element, functions);
    case 'piecewise':
      return readPiecewise(element, functions);
    default:
      throw new MathFault(element, 'unsupported_math', `<${element.name}> is not supported in an expression.`);
  }
}

function readNumber(element: XmlElement): Expression {
  const type = element.attributes.get('type') ?? 'real';
  const text = element.text.trim();
  const value =
    type === 'e-notation' || type === 'rational' ? readTwoParts(text, type) : text === '' ? NaN : Number(text);
  if (!Number.isFinite(value))
    throw new MathFault(element, 'not_a_number', `“${text.slice(0, 50)}” is not a finite number.`);
  return number(value);
}

/** Both parts stand in the text of one element, with a <sep/> between that has become a space. */
function readTwoParts(text: string, type: string): number {
  const [first, second] = text.split(/\s+/);
  if (first === undefined || second === undefined) return NaN;
  return type === 'rational' ? Number(first) / Number(second) : Number(`${first}e${second}`);
}

function readSymbol(element: XmlElement): Expression {
  const which = /([A-Za-z]+)\/?$/.exec(element.attributes.get('definitionURL')?.trim() ?? '')?.[1] ?? '';
  if (which === 'avogadro') return number(avogadro);
  if (which === 'time') return { kind: 'symbol', id: timeId };
  const message = Object.hasOwn(symbolAdvice, which) ? symbolAdvice[which]! : `The symbol “${which}” is not supported.`;
  throw new MathFault(element, `symbol_${Object.hasOwn(symbolAdvice, which) ? which : 'unknown'}`, message);
}

function readApply(element: XmlElement, functions: ReadonlyMap<string, FunctionDefinition>): Expression {
  const [head, ...rest] = element.children;
  if (head === undefined) throw new MathFault(element, 'empty_math', '<apply> is empty.');
  if (head.name === 'csymbol') {
    readSymbol(head);
    throw new MathFault(head, 'unsupported_math', 'This symbol is no function, so it cannot be applied.');
  }
  if (head.name === 'log' || head.name === 'root') return readQualified(head, rest, functions);
  const operands = rest.map((child) => read(child, functions));
  if (head.name === 'ci') return inlined(head, operands, functions);
  const known = operators.get(head.name);
  if (known === undefined) {
    throw new MathFault(
      head,
      'unsupported_math',
      `<${head.name}> is not supported: the functions are exp, ln, log10, sqrt, abs, floor, ceil, min and max.`,
    );
  }
  if (operands.length < known.least || operands.length > known.most) {
    throw new MathFault(
      head,
      'wrong_argument_count',
      `<${head.name}> has ${operands.length} arguments, which does not fit.`,
    );
  }
  return known.build(operands);
}

/** <log> with an optional <logbase>, <root> with an optional <degree>. */
function readQualified(
  head: XmlElement,
  rest: XmlElement[],
  functions: ReadonlyMap<string, FunctionDefinition>,
): Expression {
  const qualifierName = head.name === 'log' ? 'logbase' : 'degree';
  const qualifier = rest.find(({ name }) => name === qualifierName);
  const operands = rest.filter((child) => child !== qualifier).map((child) => read(child, functions));
  const [operand] = operands;
  if (operand === undefined || operands.length > 1)
    throw new MathFault(head, 'wrong_argument_count', `<${head.name}> takes one argument.`);
  const by = qualifier === undefined ? null : read(only(qualifier), functions);
  const isValue = (value: number): boolean => by === null || (by.kind === 'number' && by.value === value);
  if (head.name === 'log')
    return isValue(10) ? call('log10', operand) : binary('divide', call('ln', operand), call('ln', by!));
  return isValue(2) ? call('sqrt', operand) : binary('power', operand, binary('divide', number(1), by!));
}

function readPiecewise(element: XmlElement, functions: ReadonlyMap<string, FunctionDefinition>): Expression {
  const pieces = element.children
    .filter(({ name }) => name === 'piece')
    .map((piece) => {
      if (piece.children.length !== 2)
        throw new MathFault(piece, 'wrong_argument_count', '<piece> holds a value and a condition.');
      return { value: read(piece.children[0]!, functions), condition: read(piece.children[1]!, functions) };
    });
  const last = element.children.find(({ name }) => name === 'otherwise');
  return { kind: 'piecewise', pieces, otherwise: last === undefined ? undefinedValue : read(only(last), functions) };
}

function inlined(
  head: XmlElement,
  operands: Expression[],
  functions: ReadonlyMap<string, FunctionDefinition>,
): Expression {
  const id = head.text.trim();
  const definition = functions.get(id);
  if (definition === undefined)
    throw new MathFault(head, 'unknown_function', `There is no function definition “${id}” before its use.`);
  if (definition.parameters.length !== operands.length) {
    throw new MathFault(
      head,
      'wrong_argument_count',
      `${id} takes ${definition.parameters.length} arguments, not ${operands.length}.`,
    );
  }
  const values = new Map(definition.parameters.map((parameter, index) => [parameter, operands[index]!]));
  const sizes = new Map([...values].map(([parameter, value]) => [parameter, leavesOf(value).length]));
  const size = leavesOf(definition.body).reduce(
    (sum, leaf) => sum + ((leaf.kind === 'symbol' ? sizes.get(leaf.id) : undefined) ?? 1),
    0,
  );
  if (size > leavesMost) throw new MathFault(head, 'function_too_large', `Written out, ${id} is too large.`);
  return mapLeaves(definition.body, (leaf) => (leaf.kind === 'symbol' ? (values.get(leaf.id) ?? leaf) : leaf));
}
