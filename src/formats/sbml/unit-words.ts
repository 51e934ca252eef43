/** Reads a unit written in words, such as “1/(nM·s)” or “µL”, into base units for SBML. */

export interface BaseUnit {
  kind: 'second' | 'litre' | 'metre' | 'mole' | 'gram' | 'item' | 'dimensionless';
  exponent: number;
  scale: number;
  multiplier: number;
}

const unit = (kind: BaseUnit['kind'], multiplier = 1, scale = 0, exponent = 1): BaseUnit => ({
  kind,
  exponent,
  scale,
  multiplier,
});

const words = new Map<string, BaseUnit[]>([
  ...['s', 'sec', 'second', 'seconds'].map((word): [string, BaseUnit[]] => [word, [unit('second')]]),
  ...['min', 'minute', 'minutes'].map((word): [string, BaseUnit[]] => [word, [unit('second', 60)]]),
  ...['h', 'hour', 'hours'].map((word): [string, BaseUnit[]] => [word, [unit('second', 3600)]]),
  ...['d', 'day', 'days'].map((word): [string, BaseUnit[]] => [word, [unit('second', 86400)]]),
  ...['week', 'weeks'].map((word): [string, BaseUnit[]] => [word, [unit('second', 604800)]]),
  ...['item', 'items', 'molecule', 'molecules', 'count'].map((word): [string, BaseUnit[]] => [word, [unit('item')]]),
  ['1', [unit('dimensionless')]],
  ['dimensionless', [unit('dimensionless')]],
  ['ms', [unit('second', 1, -3)]],
  ['µs', [unit('second', 1, -6)]],
]);
const prefixes: Record<string, number> = { '': 0, k: 3, m: -3, µ: -6, μ: -6, u: -6, n: -9, p: -12, f: -15 };
const prefixed: Record<string, (scale: number) => BaseUnit[]> = {
  L: (scale) => [unit('litre', 1, scale)],
  l: (scale) => [unit('litre', 1, scale)],
  m: (scale) => [unit('metre', 1, scale)],
  g: (scale) => [unit('gram', 1, scale)],
  mol: (scale) => [unit('mole', 1, scale)],
  M: (scale) => [unit('mole', 1, scale), unit('litre', 1, 0, -1)],
};

/** The base units of `text`, or null when it is not understood. Factors stand side by side, after ·, * or /. */
export function readUnitWords(text: string): BaseUnit[] | null {
  const tokens = text.match(/[A-Za-zµμ]+|1(?![0-9.])|[\^]?[-−]?\d+|[/()*·]/g);
  if (tokens === null || tokens.join('') !== text.replaceAll(/\s/g, '')) return null;
  const units: BaseUnit[] = [];
  let sign = 1;
  const outer: number[] = [];
  let pendingDivision = false;
  for (let index = 0; index < tokens.length; index++) {
    const token = tokens[index]!;
    if (token === '/') pendingDivision = true;
    else if (token === '(') {
      outer.push(sign);
      if (pendingDivision) sign = -sign;
      pendingDivision = false;
    } else if (token === ')') {
      const before = outer.pop();
      if (before === undefined) return null;
      sign = before;
    } else if (token !== '*' && token !== '·') {
      const base = wordOf(token);
      if (base === null) return null;
      const power = /^\^?[-−]?\d+$/.test(tokens[index + 1] ?? '')
        ? Number(tokens[++index]!.replace('^', '').replace('−', '-'))
        : 1;
      const factor = sign * power * (pendingDivision ? -1 : 1);
      units.push(...base.map((one) => ({ ...one, exponent: one.exponent * factor })));
      pendingDivision = false;
    }
  }
  return outer.length > 0 || pendingDivision
    ? null
    : units.filter(({ kind }) => kind !== 'dimensionless' || units.length === 1);
}

function wordOf(word: string): BaseUnit[] | null {
  const known = words.get(word);
  if (known !== undefined) return known;
  for (const [symbol, make] of Object.entries(prefixed)) {
    if (!word.endsWith(symbol)) continue;
    const scale = prefixes[word.slice(0, -symbol.length)];
    if (scale !== undefined) return make(scale);
  }
  return null;
}
