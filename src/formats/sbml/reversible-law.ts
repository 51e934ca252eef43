/** Tells a rate that can go negative from one that cannot, and takes “forward − backward” apart. */
import type { Expression } from '@/domain/network/expression.ts';

/** Whether the form of `law` alone excludes negative values, given which names are negative. Counts never are. */
export function isNeverNegative(law: Expression, negativeNames: ReadonlySet<string>): boolean {
  const never = (node: Expression): boolean => {
    switch (node.kind) {
      case 'number':
        return node.value >= 0;
      case 'symbol':
        return !negativeNames.has(node.id);
      case 'unary':
        return node.operator === 'not';
      case 'binary':
        if (node.operator === 'subtract') return false;
        return ['add', 'multiply', 'divide', 'power'].includes(node.operator)
          ? never(node.left) && never(node.right)
          : true;
      case 'call':
        if (node.name === 'exp' || node.name === 'abs' || node.name === 'sqrt') return true;
        if (node.name === 'ln' || node.name === 'log10') return false;
        return node.name === 'max' ? node.arguments.some(never) : node.arguments.every(never);
      case 'piecewise':
        return node.pieces.every(({ value }) => never(value)) && never(node.otherwise);
      default:
        return true;
    }
  };
  return never(law);
}

/** The two parts of a law that is a difference, or a product or quotient with a difference; null for any other. */
export function splitDifference(law: Expression): { forward: Expression; backward: Expression } | null {
  if (law.kind !== 'binary') return null;
  if (law.operator === 'subtract') return { forward: law.left, backward: law.right };
  if (law.operator === 'multiply' || law.operator === 'divide') {
    const { operator } = law;
    const left = splitDifference(law.left);
    const wrap = (part: Expression, other: Expression, first: boolean): Expression =>
      first
        ? { kind: 'binary', operator, left: part, right: other }
        : { kind: 'binary', operator, left: other, right: part };
    if (left !== null)
      return { forward: wrap(left.forward, law.right, true), backward: wrap(left.backward, law.right, true) };
    const right = operator === 'multiply' ? splitDifference(law.right) : null;
    if (right !== null)
      return { forward: wrap(right.forward, law.left, false), backward: wrap(right.backward, law.left, false) };
  }
  return null;
}
