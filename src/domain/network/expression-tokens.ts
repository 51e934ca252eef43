/** Cuts the text of an expression into tokens, each with its place, and refuses what is no part of the language. */

/** A fault in a text, at a character counted from 0, with what to write instead. */
export interface TextFault {
  position: number;
  code: string;
  message: string;
}

export type Token =
  | { kind: 'number'; value: number; position: number; text: string }
  | { kind: 'name'; text: string; position: number }
  | { kind: 'operator'; text: string; position: number }
  | { kind: 'end'; text: string; position: number };

/** The trade writes these signs in several ways; the parser sees one. */
const spellings: Record<string, string> = {
  '−': '-',
  '–': '-',
  '×': '*',
  '·': '*',
  '⋅': '*',
  '÷': '/',
  '≤': '<=',
  '≥': '>=',
  '≠': '!=',
  '∧': 'and',
  '∨': 'or',
  '¬': 'not',
  '&&': 'and',
  '||': 'or',
  '!': 'not',
};

const space = /\s+/y;
const number = /(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?/y;
const name = /[A-Za-z_][A-Za-z0-9_]*/y;
const operator = /\*\*|==|!=|<=|>=|&&|\|\||[-+*/^(),<>=!&|−–×·⋅÷≤≥≠∧∨¬]/y;

const advice: Record<string, string> = {
  '=': 'Compare with == ; an expression cannot assign.',
  '**': 'Write a power with ^, as in x^2.',
  '&': 'Write “and”.',
  '|': 'Write “or”.',
  '%': 'There is no remainder; floor may help: x - y * floor(x / y).',
  '[': 'A species stands under its id alone, without brackets; its row says whether that means a count or a concentration.',
  '{': 'Use round parentheses.',
};

/** Tokens of `text`, the last of kind `end`; or the first fault. */
export function tokensOf(text: string): { ok: true; tokens: Token[] } | { ok: false; fault: TextFault } {
  const tokens: Token[] = [];
  let position = 0;
  const match = (pattern: RegExp): string | null => {
    pattern.lastIndex = position;
    return pattern.exec(text)?.[0] ?? null;
  };
  const fault = (code: string, message: string) => ({ ok: false as const, fault: { position, code, message } });

  while (position < text.length) {
    const blank = match(space);
    if (blank !== null) {
      position += blank.length;
      continue;
    }
    const digits = match(number);
    if (digits !== null) {
      const value = Number(digits);
      if (!Number.isFinite(value))
        return fault('number_too_large', `${digits} is beyond the largest number, about 1.8e308.`);
      tokens.push({ kind: 'number', value, position, text: digits });
      position += digits.length;
      const glued = match(name);
      if (glued !== null) return fault('missing_operator', `Write a multiplication sign: ${digits} * ${glued}.`);
      continue;
    }
    const word = match(name);
    if (word !== null) {
      const isOperator = word === 'and' || word === 'or' || word === 'not';
      tokens.push({ kind: isOperator ? 'operator' : 'name', text: word, position });
      position += word.length;
      continue;
    }
    const sign = match(operator);
    if (sign === null || advice[sign] !== undefined) {
      const character = sign ?? String.fromCodePoint(text.codePointAt(position)!);
      return fault(
        'unexpected_character',
        `“${character}” is not part of an expression. ${advice[character] ?? ''}`.trim(),
      );
    }
    tokens.push({ kind: 'operator', text: spellings[sign] ?? sign, position });
    position += sign.length;
  }
  tokens.push({ kind: 'end', text: '', position });
  return { ok: true, tokens };
}
