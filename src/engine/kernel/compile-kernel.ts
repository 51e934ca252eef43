/** Compiles kernels and keeps the last few: points of a sweep and batches of a job share one module and one memory. */
import { encodeModule } from './wasm/encode-module.ts';
import type { ModuleBuilder } from './wasm/module-builder.ts';

export interface CompiledKernel {
  memory: WebAssembly.Memory;
  /** Goes on for at most so many firings; answers a `status` of memory-layout.ts. */
  run(firings: number): number;
  /** The SIMD kernel: advances all lanes by at most so many steps. Absent in scalar modules. */
  runLanes?: (steps: number) => number;
  /** Whose task stands in the memory: whoever runs next writes its own first. */
  owner: unknown;
}

const keptKernels = 16;
const compiled = new Map<string, Promise<CompiledKernel>>();

async function compile(build: () => ModuleBuilder): Promise<CompiledKernel> {
  const module = await WebAssembly.compile(encodeModule(build()));
  const memory = new WebAssembly.Memory({ initial: 1 });
  const instance = await WebAssembly.instantiate(module, { env: { memory } });
  const { run, runLanes } = instance.exports as Pick<CompiledKernel, 'run' | 'runLanes'>;
  return { memory, run, runLanes, owner: null };
}

/** `key` names the code that `build` makes. A memory may be used by one synchronous run at a time. */
export function compiledKernel(key: string, build: () => ModuleBuilder): Promise<CompiledKernel> {
  const known = compiled.get(key);
  compiled.delete(key);
  const kernel = known ?? compile(build);
  compiled.set(key, kernel);
  kernel.catch(() => compiled.delete(key));
  const oldest = compiled.keys().next().value;
  if (compiled.size > keptKernels && oldest !== undefined) compiled.delete(oldest);
  return kernel;
}

const pageBytes = 65536;

/** Grows the memory to at least `bytes`; views made before are void. */
export function ensureBytes(memory: WebAssembly.Memory, bytes: number): void {
  const missing = bytes - memory.buffer.byteLength;
  if (missing > 0) memory.grow(Math.ceil(missing / pageBytes));
}
