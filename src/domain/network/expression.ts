/** The syntax tree of a rate law. Parsing and printing stand beside it (parse-expression.ts, print-expression.ts). */

export type UnaryOperator = 'negate' | 'not';
export type BinaryOperator =
  | 'add'
  | 'subtract'
  | 'multiply'
  | 'divide'
  | 'power'
  | 'equal'
  | 'notEqual'
  | 'less'
  | 'lessOrEqual'
  | 'greater'
  | 'greaterOrEqual'
  | 'and'
  | 'or';
export type FunctionName = 'exp' | 'ln' | 'log10' | 'sqrt' | 'abs' | 'floor' | 'ceil' | 'min' | 'max';

/** Truth values are 1 and 0; any number but 0 counts as true. */
export type Expression =
  | { kind: 'number'; value: number }
  /** Before resolution. */
  | { kind: 'symbol'; id: string }
  /** After resolution: the count of a species (a concentration has become count / size). */
  | { kind: 'species'; index: number }
  | { kind: 'parameter'; index: number }
  | { kind: 'unary'; operator: UnaryOperator; operand: Expression }
  | { kind: 'binary'; operator: BinaryOperator; left: Expression; right: Expression }
  | { kind: 'call'; name: FunctionName; arguments: Expression[] }
  /** The value of the first piece whose condition is true, else `otherwise`. */
  | { kind: 'piecewise'; pieces: { value: Expression; condition: Expression }[]; otherwise: Expression };
