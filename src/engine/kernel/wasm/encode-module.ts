/**
 * Turns a module's trees into the binary format.
 * Source: W3C WebAssembly Core Specification 2.0, chapter 5. The memory is imported as env.memory.
 */
import type { FunctionBuilder, ModuleBuilder } from './module-builder.ts';
import type { Callable, Label, Node } from './node.ts';
import { valueTypeCodes, type ValueType } from './opcodes.ts';

/** A growing array of bytes. */
class ByteWriter {
  #bytes = new Uint8Array(1024);
  length = 0;

  byte(value: number): void {
    if (this.length === this.#bytes.length) {
      const larger = new Uint8Array(this.#bytes.length * 2);
      larger.set(this.#bytes);
      this.#bytes = larger;
    }
    this.#bytes[this.length++] = value;
  }

  bytes(values: Iterable<number>): void {
    for (const value of values) this.byte(value);
  }

  /** LEB128 of an unsigned 32-bit integer. */
  unsigned(value: number): void {
    do {
      const low = value & 127;
      value >>>= 7;
      this.byte(value === 0 ? low : low | 128);
    } while (value !== 0);
  }

  /** LEB128 of a signed integer. */
  signed(value: bigint): void {
    for (;;) {
      const low = Number(value & 127n);
      value >>= 7n;
      const last = (value === 0n && (low & 64) === 0) || (value === -1n && (low & 64) !== 0);
      this.byte(last ? low : low | 128);
      if (last) return;
    }
  }

  text(value: string): void {
    const bytes = new TextEncoder().encode(value);
    this.unsigned(bytes.length);
    this.bytes(bytes);
  }

  fixed64(value: bigint): void {
    for (let i = 0n; i < 64n; i += 8n) this.byte(Number((value >> i) & 255n));
  }

  view(): Uint8Array<ArrayBuffer> {
    return this.#bytes.subarray(0, this.length);
  }
}

const emptyBlock = 0x40;
const end = 0x0b;

/** Encodes trees of any depth: what waits to be encoded stands in a list of its own, not on the host's stack. */
class FunctionEncoder {
  /** Position of each open label, counted from the outermost. */
  #labels = new Map<Label, number>();
  #waiting: (Node | (() => void))[] = [];

  constructor(
    readonly out: ByteWriter,
    readonly functionIndex: (target: Callable) => number,
    readonly typeIndex: (takes: readonly ValueType[]) => number,
  ) {}

  encode(body: readonly Node[]): void {
    this.#later(body);
    for (let step = this.#waiting.pop(); step; step = this.#waiting.pop()) {
      if (typeof step === 'function') {
        step();
      } else if (step.operands.length === 0) {
        this.#own(step);
      } else {
        const node = step;
        this.#waiting.push(() => this.#own(node));
        this.#later(node.operands);
      }
    }
  }

  #later(nodes: readonly Node[]): void {
    for (let index = nodes.length - 1; index >= 0; index--) this.#waiting.push(nodes[index]!);
  }

  #depth(target: Label): number {
    const position = this.#labels.get(target);
    if (position === undefined) throw new Error(`branch to ${target.name} from outside it`);
    return this.#labels.size - 1 - position;
  }

  #structure(code: number, target: Label, body: readonly Node[], otherwise: readonly Node[] = []): void {
    this.out.bytes([code, emptyBlock]);
    this.#labels.set(target, this.#labels.size);
    this.#waiting.push(() => {
      this.#labels.delete(target);
      this.out.byte(end);
    });
    if (otherwise.length > 0) {
      this.#later(otherwise);
      this.#waiting.push(() => this.out.byte(0x05));
    }
    this.#later(body);
  }

  /** The node's own code, once that of its operands stands. */
  #own({ detail, name }: Node): void {
    const { out } = this;
    switch (detail.kind) {
      case 'operation':
        out.bytes(detail.code);
        out.bytes(detail.immediates);
        return;
      case 'memory':
        out.bytes(detail.code);
        out.unsigned(detail.alignment);
        out.unsigned(detail.offset);
        if (detail.lane !== null) out.byte(detail.lane);
        return;
      case 'i32.const':
        out.byte(0x41);
        out.signed(BigInt(detail.value | 0));
        return;
      case 'i64.const':
        out.byte(0x42);
        out.signed(detail.value);
        return;
      case 'f64.const':
        out.byte(0x44);
        out.bytes(new Uint8Array(Float64Array.of(detail.value).buffer));
        return;
      case 'v128.const':
        out.bytes([0xfd, 0x0c]);
        out.fixed64(detail.low);
        out.fixed64(detail.high);
        return;
      case 'local':
        out.byte({ get: 0x20, set: 0x21, tee: 0x22 }[detail.action]);
        out.unsigned(detail.local.index);
        return;
      case 'call':
        out.byte(0x10);
        out.unsigned(this.functionIndex(detail.target));
        return;
      case 'callIndirect':
        out.byte(0x11);
        out.unsigned(this.typeIndex(detail.takes));
        out.byte(0);
        return;
      case 'block':
        return this.#structure(0x02, detail.label, detail.body);
      case 'loop':
        return this.#structure(0x03, detail.label, detail.body);
      case 'if':
        return this.#structure(0x04, { name: 'if' }, detail.body, detail.otherwise);
      case 'branch':
        out.byte(detail.conditional ? 0x0d : 0x0c);
        out.unsigned(this.#depth(detail.label));
        return;
      case 'branchTable':
        out.byte(0x0e);
        out.unsigned(detail.labels.length);
        for (const target of detail.labels) out.unsigned(this.#depth(target));
        out.unsigned(this.#depth(detail.fallback));
        return;
      case 'select':
        out.byte(0x1b);
        return;
      case 'return':
        out.byte(0x0f);
        return;
      case 'drop':
        out.byte(0x1a);
        return;
      default:
        throw new Error(`no encoding for ${name}`);
    }
  }
}

function encodeBody(
  builder: FunctionBuilder,
  functionIndex: (target: Callable) => number,
  typeIndex: (takes: readonly ValueType[]) => number,
): Uint8Array {
  const out = new ByteWriter();
  const own = builder.locals.slice(builder.takes.length);
  const runs: { type: ValueType; count: number }[] = [];
  for (const { type } of own) {
    const last = runs.at(-1);
    if (last?.type === type) last.count++;
    else runs.push({ type, count: 1 });
  }
  out.unsigned(runs.length);
  for (const run of runs) {
    out.unsigned(run.count);
    out.byte(valueTypeCodes[run.type]);
  }
  const encoder = new FunctionEncoder(out, functionIndex, typeIndex);
  encoder.encode(builder.body);
  out.byte(end);
  return out.view();
}

/** The bytes of the module; `WebAssembly.compile` accepts them as they are. */
export function encodeModule(module: ModuleBuilder): Uint8Array<ArrayBuffer> {
  const { functions, table } = module;
  const indices = new Map<unknown, number>(functions.map((builder, index) => [builder, index]));
  const functionIndex = (target: Callable): number => {
    const index = indices.get(target);
    if (index === undefined) throw new Error(`${target.name} is not part of the module`);
    return index;
  };
  const signatures: string[] = [];
  const signatureBytes: number[][] = [];
  const signatureIndex = (takes: readonly ValueType[], gives: ValueType | 'none'): number => {
    const bytes = [0x60, takes.length, ...takes.map((type) => valueTypeCodes[type])];
    bytes.push(...(gives === 'none' ? [0] : [1, valueTypeCodes[gives]]));
    const found = signatures.indexOf(bytes.join());
    if (found >= 0) return found;
    signatures.push(bytes.join());
    return signatureBytes.push(bytes) - 1;
  };
  const typeOf = functions.map((builder) => signatureIndex(builder.takes, builder.gives));
  const bodies = functions.map((builder) =>
    encodeBody(builder, functionIndex, (takes) => signatureIndex(takes, 'f64')),
  );

  const out = new ByteWriter();
  out.bytes([0x00, 0x61, 0x73, 0x6d, 0x01, 0x00, 0x00, 0x00]);
  const section = (id: number, write: (content: ByteWriter) => void): void => {
    const content = new ByteWriter();
    write(content);
    out.byte(id);
    out.unsigned(content.length);
    out.bytes(content.view());
  };
  section(1, (content) => {
    content.unsigned(signatureBytes.length);
    for (const bytes of signatureBytes) content.bytes(bytes);
  });
  section(2, (content) => {
    content.unsigned(1);
    content.text('env');
    content.text('memory');
    content.bytes([0x02, 0x00, 0x01]);
  });
  section(3, (content) => {
    content.unsigned(functions.length);
    for (const type of typeOf) content.unsigned(type);
  });
  if (table.length > 0)
    section(4, (content) => {
      content.bytes([1, 0x70, 0x00]);
      content.unsigned(table.length);
    });
  section(7, (content) => {
    const exported = functions.filter((builder) => builder.exported);
    content.unsigned(exported.length);
    for (const builder of exported) {
      content.text(builder.name);
      content.byte(0x00);
      content.unsigned(functionIndex(builder));
    }
  });
  if (table.length > 0)
    section(9, (content) => {
      content.bytes([1, 0x00, 0x41, 0x00, end]);
      content.unsigned(table.length);
      for (const builder of table) content.unsigned(functionIndex(builder));
    });
  section(10, (content) => {
    content.unsigned(bodies.length);
    for (const body of bodies) {
      content.unsigned(body.length);
      content.bytes(body);
    }
  });
  return out.view();
}
