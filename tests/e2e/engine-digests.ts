/** What is bundled and run in Node and in a browser: a digest of everything that a batch answers, by model and kernel. */
import { demoModels } from '@db/seeds/demo-models.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { KernelName } from '@/engine/ensemble.ts';
import { decayingDimerising } from '@tests/factories/networks.ts';
import { runBatch } from '@/engine/run-batch.ts';

/** Enough molecules for Poisson numbers of every size. */
export const leaped = 'the decaying-dimerising set, leaped';

/** By demo model, then by kernel. */
export type Digests = Record<string, Partial<Record<KernelName, string>>>;

const kernels: KernelName[] = ['direct-simd', 'direct-scalar', 'reference'];

export async function engineDigests(): Promise<Digests> {
  const digests: Digests = {};
  for (const { name, network } of demoModels) {
    const resolved = resolveNetwork(network);
    if (!resolved.ok) throw new Error(`${name} cannot run`);
    digests[name] = {};
    for (const kernel of kernels) digests[name][kernel] = await digestOfBatch(resolved.network, kernel);
  }
  digests[leaped] = {};
  for (const kernel of ['tau-leaping', 'tau-leaping-reference'] as const)
    digests[leaped][kernel] = await digestOfBatch(decayingDimerising(), kernel, 0.03);
  return digests;
}

async function digestOfBatch(network: ResolvedNetwork, kernel: KernelName, epsilon?: number): Promise<string> {
  const result = await runBatch({
    network,
    horizon: 20,
    gridIntervals: 40,
    seed: '20261201',
    purpose: 'job',
    point: 0,
    firstReplicate: 0,
    replicateCount: 60,
    keptTraces: 10,
    eventBudgetPerReplicate: null,
    eventBudgetPerBatch: null,
    kernel,
    ...(epsilon === undefined ? {} : { epsilon }),
  });
  return digestOf([
    result.summary.encode(),
    bytesOf(result.eventsPerReplicate),
    bytesOf(result.passageTimes),
    ...result.traces.map(({ values }) => bytesOf(values)),
  ]);
}

const bytesOf = ({ buffer, byteOffset, byteLength }: Float64Array): Uint8Array =>
  new Uint8Array(buffer, byteOffset, byteLength);

/** FNV-1a, 64 bits: a browser has SHA-256 only on secure pages. */
function digestOf(parts: Uint8Array[]): string {
  let hash = 0xcbf29ce484222325n;
  for (const part of parts) for (const byte of part) hash = BigInt.asUintN(64, (hash ^ BigInt(byte)) * 0x100000001b3n);
  return hash.toString(16);
}
