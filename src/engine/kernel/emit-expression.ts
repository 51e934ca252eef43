/**
 * Terms and propensities as generated code, in either width; the same operations in the same order as `evaluate.ts`.
 * Logarithms, exponentials and general powers have one form, on single numbers; vectors pass through it lane by lane.
 */
import type { BinaryOperator } from '@/domain/network/expression.ts';
import { decimalLogarithmFunction } from './elementary/decimal-logarithm.ts';
import { exponentialFunction } from './elementary/exponential.ts';
import { logarithmFunction } from './elementary/logarithm.ts';
import { emitWholePower, largestWholeExponent, powerFunction } from './elementary/power.ts';
import type { Lanes, Real, Truth, Width } from './lanes.ts';
import { largestHoistedOrder, type PreparedReaction, type Term } from './prepared-network.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import { call, get, lane, op, set, type Local, type Node } from './wasm/node.ts';

/** Where an expression finds its leaves. */
export interface Leaves<W extends Width> {
  species(index: number): Node<Real<W>>;
  constant(slot: number): Node<Real<W>>;
  assigned(index: number): Node<Real<W>>;
}

export class ExpressionEmitter<W extends Width> {
  /** Statements to run before the value just emitted. */
  #before: Node[] = [];

  constructor(
    readonly lanes: Lanes<W>,
    readonly module: ModuleBuilder,
    readonly fn: FunctionBuilder,
    readonly leaves: Leaves<W>,
  ) {}

  /** Statements that put the term's value into `target`. */
  assign(target: Local<Real<W>>, term: Term): Node[] {
    const value = this.#real(term);
    return [...this.#take(), set(target, value)];
  }

  /** Statements that put the reaction's propensity into `target`. */
  assignPropensity(target: Local<Real<W>>, { law }: PreparedReaction): Node[] {
    const { lanes, leaves } = this;
    let value: Node<Real<W>>;
    if (law.kind === 'massAction') {
      value = this.#real(law.factor);
      for (const { species, order } of law.orders)
        for (let i = 0; i < order; i++) {
          const count = leaves.species(species);
          value = lanes.multiply(value, i === 0 ? count : lanes.subtract(count, lanes.real(i)));
          if (order > largestHoistedOrder) value = lanes.divide(value, lanes.real(i + 1));
        }
    } else {
      value = this.#real(law.value);
      const holds = law.guards.map(({ species, atLeast }) =>
        lanes.lessOrEqual(lanes.real(atLeast), leaves.species(species)),
      );
      if (holds.length > 0) {
        const possible = holds.reduce((all, one) => lanes.both(all, one));
        value = lanes.orZero(possible, value);
      }
    }
    return [...this.#take(), set(target, value)];
  }

  #take(): Node[] {
    const statements = this.#before;
    this.#before = [];
    return statements;
  }

  /** Keeps a value that is used more than once in a local. */
  #keep(value: Node<Real<W>>): Node<Real<W>> {
    const local = this.fn.local(this.lanes.realType, 'kept') as Local<Real<W>>;
    this.#before.push(set(local, value));
    return get(local);
  }

  #real(term: Term): Node<Real<W>> {
    const { lanes, leaves } = this;
    switch (term.kind) {
      case 'number':
        return lanes.real(term.value);
      case 'species':
        return leaves.species(term.index);
      case 'constant':
        return leaves.constant(term.slot);
      case 'assigned':
        return leaves.assigned(term.index);
      case 'unary':
        return term.operator === 'negate'
          ? lanes.negate(this.#real(term.operand))
          : lanes.truthAsReal(this.#truth(term));
      case 'binary':
        return this.#binary(term.operator, term);
      case 'call':
        return this.#call(term);
      case 'piecewise':
        return term.pieces.reduceRight(
          (rest, { value, condition }) => lanes.choose(this.#truth(condition), this.#real(value), rest),
          this.#real(term.otherwise),
        );
    }
  }

  #binary(operator: BinaryOperator, term: Term & { kind: 'binary' }): Node<Real<W>> {
    const { lanes } = this;
    if (operator === 'power') return this.#power(term.left, term.right);
    const arithmetic = { add: lanes.add, subtract: lanes.subtract, multiply: lanes.multiply, divide: lanes.divide };
    if (operator in arithmetic)
      return arithmetic[operator as keyof typeof arithmetic](this.#real(term.left), this.#real(term.right));
    return lanes.truthAsReal(this.#truth(term));
  }

  /** Any number but 0 counts as true, NaN too. */
  #truth(term: Term): Node<Truth<W>> {
    const { lanes } = this;
    if (term.kind === 'unary' && term.operator === 'not') return lanes.not(this.#truth(term.operand));
    if (term.kind === 'binary') {
      const left = (): Node<Real<W>> => this.#real(term.left);
      const right = (): Node<Real<W>> => this.#real(term.right);
      switch (term.operator) {
        case 'equal':
          return lanes.equal(left(), right());
        case 'notEqual':
          return lanes.notEqual(left(), right());
        case 'less':
          return lanes.less(left(), right());
        case 'lessOrEqual':
          return lanes.lessOrEqual(left(), right());
        case 'greater': {
          const larger = left();
          return lanes.less(right(), larger);
        }
        case 'greaterOrEqual': {
          const larger = left();
          return lanes.lessOrEqual(right(), larger);
        }
        case 'and':
          return lanes.both(this.#truth(term.left), this.#truth(term.right));
        case 'or':
          return lanes.either(this.#truth(term.left), this.#truth(term.right));
      }
    }
    return lanes.notEqual(this.#real(term), lanes.real(0));
  }

  #power(base: Term, exponent: Term): Node<Real<W>> {
    const { lanes } = this;
    const n = exponent.kind === 'number' ? exponent.value : NaN;
    if (!(Math.abs(n) <= largestWholeExponent) || !Number.isInteger(n))
      return this.#perLane(powerFunction(this.module), [this.#real(base), this.#real(exponent)]);
    const x = this.#keep(this.#real(base));
    const raised =
      emitWholePower(
        x,
        Math.abs(n),
        (a, b) => lanes.multiply(a, b),
        (value) => this.#keep(value),
      ) ?? lanes.real(1);
    return n < 0 ? lanes.divide(lanes.real(1), raised) : raised;
  }

  #call(term: Term & { kind: 'call' }): Node<Real<W>> {
    const { lanes, module } = this;
    const values = term.arguments.map((argument) => this.#real(argument));
    const [first] = values as [Node<Real<W>>];
    switch (term.name) {
      case 'exp':
        return this.#perLane(exponentialFunction(module), values);
      case 'ln':
        return this.#perLane(logarithmFunction(module), values);
      case 'log10':
        return this.#perLane(decimalLogarithmFunction(module), values);
      case 'sqrt':
        return lanes.squareRoot(first);
      case 'abs':
        return lanes.absolute(first);
      case 'floor':
        return lanes.floor(first);
      case 'ceil':
        return lanes.ceiling(first);
      case 'min':
        return values.reduce((least, value) => lanes.minimum(least, value));
      case 'max':
        return values.reduce((most, value) => lanes.maximum(most, value));
    }
  }

  #perLane(target: FunctionBuilder<'f64'>, values: Node<Real<W>>[]): Node<Real<W>> {
    if (this.lanes.width === 'scalar') return call(target, ...values) as Node<Real<W>>;
    const kept = values.map((value) => {
      const local = this.fn.local('v128', 'argument');
      this.#before.push(set(local, value as Node<'v128'>));
      return local;
    });
    const inLane = (index: number): Node<'f64'> =>
      call(target, ...kept.map((local) => lane('f64x2.extract_lane', index, get(local))));
    return lane('f64x2.replace_lane', 1, op('f64x2.splat', inLane(0)), inLane(1)) as Node<Real<W>>;
  }
}
