/**
 * Reads the text of a rate law, rule or observable into its syntax tree.
 *
 * From loosest to tightest: or · and · not · comparison (one at a time) · + − · * / · unary − + · ^ (from the right).
 * So −x^2 is −(x^2), 2^3^2 is 2^9, and `not a == b` is not (a == b). `!`, `&&` and `||` are spellings of not, and, or.
 */
import { limits } from '../limits.ts';
import type { BinaryOperator, Expression, FunctionName } from './expression.ts';
import { tokensOf, type TextFault, type Token } from './expression-tokens.ts';
import { functionNames, nearestName } from './identifiers.ts';

export type ParsedExpression = { ok: true; expression: Expression } | { ok: false; fault: TextFault };

const comparisons: Record<string, BinaryOperator> = {
  '==': 'equal',
  '!=': 'notEqual',
  '<': 'less',
  '<=': 'lessOrEqual',
  '>': 'greater',
  '>=': 'greaterOrEqual',
};
const additive: Record<string, BinaryOperator> = { '+': 'add', '-': 'subtract' };
const multiplicative: Record<string, BinaryOperator> = { '*': 'multiply', '/': 'divide' };
const conjunction: Record<string, BinaryOperator> = { and: 'and' };
const disjunction: Record<string, BinaryOperator> = { or: 'or' };

/** What people write for a function that goes by another name here. */
const otherFunctions: Record<string, string> = {
  log: 'Write ln for the natural logarithm or log10 for the decimal one.',
  pow: 'Write a power with ^, as in x^2.',
  if: 'Write piecewise(value, condition, otherwise).',
  ceiling: 'Write ceil.',
};

class Fault extends Error {
  constructor(readonly fault: TextFault) {
    super(fault.message);
  }
}

/**
 * The syntax tree of `text`, with names as `symbol` leaves; or the first fault and its character position.
 * Limits: `limits.expressionCharacters` long, `limits.expressionDepth` nested.
 */
export function parseExpression(text: string): ParsedExpression {
  if (text.length > limits.expressionCharacters) {
    const message = `An expression has at most ${limits.expressionCharacters} characters; this one has ${text.length}. Split it with assignment rules.`;
    return { ok: false, fault: { position: limits.expressionCharacters, code: 'expression_too_long', message } };
  }
  const cut = tokensOf(text);
  if (!cut.ok) return cut;
  try {
    return { ok: true, expression: new Parser(cut.tokens).whole() };
  } catch (error) {
    if (error instanceof Fault) return { ok: false, fault: error.fault };
    throw error;
  }
}

class Parser {
  #next = 0;
  #depth = 0;

  constructor(private readonly tokens: Token[]) {}

  whole(): Expression {
    if (this.#ended) this.#fail('empty_expression', 'An expression is needed, such as k * A.');
    const expression = this.#or();
    if (!this.#ended) this.#failOnLeftover();
    return expression;
  }

  get #ended(): boolean {
    return this.#token.kind === 'end';
  }

  get #token(): Token {
    return this.tokens[this.#next]!;
  }

  #fail(code: string, message: string, position = this.#token.position): never {
    throw new Fault({ position, code, message });
  }

  #failOnLeftover(): never {
    const { kind, text } = this.#token;
    if (text === ')') this.#fail('unbalanced_parenthesis', 'This parenthesis closes nothing.');
    if (text === ',')
      this.#fail(
        'unexpected_comma',
        'A comma only separates the arguments of a function; decimals take a point, as in 0.5.',
      );
    if (kind === 'operator' && text !== '(') this.#fail('unexpected_operator', `“${text}” does not fit here.`);
    this.#fail('missing_operator', `An operator is missing before “${text}”; a product is written with *.`);
  }

  #takes(text: string): boolean {
    if (this.#token.kind !== 'operator' || this.#token.text !== text) return false;
    this.#next++;
    return true;
  }

  /** One level deeper, for constructs that nest; sums and products of many terms do not. */
  #nested(read: () => Expression): Expression {
    if (++this.#depth > limits.expressionDepth) {
      this.#fail(
        'expression_too_deep',
        `An expression nests at most ${limits.expressionDepth} deep; split it with assignment rules.`,
      );
    }
    const expression = read();
    this.#depth--;
    return expression;
  }

  #leftToRight(operators: Record<string, BinaryOperator>, operand: () => Expression): Expression {
    let left = operand();
    for (;;) {
      const operator = this.#token.kind === 'operator' ? operators[this.#token.text] : undefined;
      if (operator === undefined) return left;
      this.#next++;
      left = { kind: 'binary', operator, left, right: operand() };
    }
  }

  #or(): Expression {
    return this.#leftToRight(disjunction, () => this.#and());
  }

  #and(): Expression {
    return this.#leftToRight(conjunction, () => this.#not());
  }

  #not(): Expression {
    if (!this.#takes('not')) return this.#comparison();
    return this.#nested(() => ({ kind: 'unary', operator: 'not', operand: this.#not() }));
  }

  #comparison(): Expression {
    const left = this.#sum();
    const operator = this.#comparisonHere();
    if (operator === undefined) return left;
    this.#next++;
    const comparison: Expression = { kind: 'binary', operator, left, right: this.#sum() };
    if (this.#comparisonHere() !== undefined) {
      this.#fail('chained_comparison', 'Comparisons do not chain; write a < b and b < c.');
    }
    return comparison;
  }

  #comparisonHere(): BinaryOperator | undefined {
    return this.#token.kind === 'operator' ? comparisons[this.#token.text] : undefined;
  }

  #sum(): Expression {
    return this.#leftToRight(additive, () => this.#product());
  }

  #product(): Expression {
    return this.#leftToRight(multiplicative, () => this.#signed());
  }

  #signed(): Expression {
    if (this.#takes('-')) return this.#nested(() => ({ kind: 'unary', operator: 'negate', operand: this.#signed() }));
    if (this.#takes('+')) return this.#nested(() => this.#signed());
    return this.#power();
  }

  #power(): Expression {
    const left = this.#primary();
    if (!this.#takes('^')) return left;
    return { kind: 'binary', operator: 'power', left, right: this.#nested(() => this.#signed()) };
  }

  #primary(): Expression {
    const token = this.#token;
    if (token.kind === 'number') {
      this.#next++;
      return { kind: 'number', value: token.value };
    }
    if (token.kind === 'name') {
      this.#next++;
      return this.#token.text === '(' ? this.#call(token) : this.#symbol(token);
    }
    if (this.#takes('(')) {
      const inner = this.#nested(() => this.#or());
      if (!this.#takes(')')) this.#failOnUnclosed(token);
      return inner;
    }
    if (token.kind === 'end') this.#fail('unfinished_expression', 'The expression ends where a value should stand.');
    this.#fail('missing_value', `A value is missing before “${token.text}”.`);
  }

  #failOnUnclosed(opening: Token): never {
    if (this.#token.kind === 'end')
      this.#fail('unbalanced_parenthesis', 'This parenthesis is never closed.', opening.position);
    this.#failOnLeftover();
  }

  #symbol(token: Token): Expression {
    if (token.text === 'piecewise' || isFunctionName(token.text)) {
      this.#fail(
        'missing_arguments',
        `“${token.text}” is a function and needs its arguments in parentheses.`,
        token.position,
      );
    }
    return { kind: 'symbol', id: token.text };
  }

  #call(name: Token): Expression {
    const known = name.text === 'piecewise' || isFunctionName(name.text);
    if (!known) this.#fail('unknown_function', unknownFunction(name.text), name.position);
    const opening = this.#token;
    this.#next++;
    const parameters: Expression[] = [];
    if (!this.#takes(')')) {
      do parameters.push(this.#nested(() => this.#or()));
      while (this.#takes(','));
      if (!this.#takes(')')) this.#failOnUnclosed(opening);
    }
    return name.text === 'piecewise' ? this.#piecewise(name, parameters) : this.#function(name, parameters);
  }

  #function(token: Token, parameters: Expression[]): Expression {
    const name = token.text as FunctionName;
    const many = name === 'min' || name === 'max';
    if (many ? parameters.length === 0 : parameters.length !== 1) {
      this.#fail(
        'wrong_argument_count',
        `${name} takes ${many ? 'one argument or more' : 'one argument'}; here are ${parameters.length}.`,
        token.position,
      );
    }
    return { kind: 'call', name, arguments: parameters };
  }

  #piecewise(token: Token, parameters: Expression[]): Expression {
    if (parameters.length % 2 === 0) {
      this.#fail(
        'wrong_argument_count',
        'piecewise takes value, condition, … and a last value for all other cases: an odd number of arguments.',
        token.position,
      );
    }
    const pieces = [];
    for (let index = 0; index + 1 < parameters.length; index += 2) {
      pieces.push({ value: parameters[index]!, condition: parameters[index + 1]! });
    }
    return { kind: 'piecewise', pieces, otherwise: parameters.at(-1)! };
  }
}

function isFunctionName(text: string): text is FunctionName {
  return (functionNames as readonly string[]).includes(text);
}

function unknownFunction(text: string): string {
  const near = nearestName(text, [...functionNames, 'piecewise']);
  const more = Object.hasOwn(otherFunctions, text)
    ? otherFunctions[text]!
    : near !== null
      ? `Did you mean ${near}?`
      : `The functions are ${functionNames.join(', ')} and piecewise; a product needs *.`;
  return `There is no function “${text}”. ${more}`;
}
