/** Collects the functions of one WebAssembly module: an imported memory, exported functions, an optional table. */
import type { Callable, Gives, Local, Node } from './node.ts';
import type { ValueType } from './opcodes.ts';

export class FunctionBuilder<G extends Gives = Gives> implements Callable<G> {
  readonly locals: Local[] = [];
  readonly body: Node[] = [];
  readonly takes: readonly ValueType[];

  constructor(
    readonly name: string,
    parameters: readonly (readonly [name: string, type: ValueType])[],
    readonly gives: G,
    readonly exported: boolean,
  ) {
    this.takes = parameters.map(([, type]) => type);
    for (const [parameter, type] of parameters) this.local(type, parameter);
  }

  /** A new local; parameters are the first ones, in order. */
  local<T extends ValueType>(type: T, name: string): Local<T> {
    const local = { type, index: this.locals.length, name };
    this.locals.push(local);
    return local;
  }

  parameter<T extends ValueType>(index: number, type: T): Local<T> {
    const local = this.locals[index];
    if (index >= this.takes.length || local?.type !== type)
      throw new Error(`${this.name} has no parameter ${index}: ${type}`);
    return local as Local<T>;
  }

  emit(...nodes: Node[]): this {
    this.body.push(...nodes);
    return this;
  }
}

export class ModuleBuilder {
  readonly functions: FunctionBuilder[] = [];
  /** Functions that `callIndirect` can reach, by position. */
  readonly table: FunctionBuilder[] = [];
  #shared = new Map<string, FunctionBuilder>();

  function<G extends Gives>(
    name: string,
    parameters: readonly (readonly [name: string, type: ValueType])[],
    gives: G,
    options: { exported?: boolean } = {},
  ): FunctionBuilder<G> {
    const builder = new FunctionBuilder(name, parameters, gives, options.exported ?? false);
    this.functions.push(builder as unknown as FunctionBuilder);
    return builder;
  }

  /** The function of this name, built by `build` at its first use. */
  shared<G extends Gives>(name: string, build: (module: ModuleBuilder) => FunctionBuilder<G>): FunctionBuilder<G> {
    const known = this.#shared.get(name);
    if (known) return known as unknown as FunctionBuilder<G>;
    const built = build(this);
    this.#shared.set(name, built as unknown as FunctionBuilder);
    return built;
  }
}
