/** Compiles and runs the hand-written C programs beside this file. */
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';

export const compilerFlags = ['-O3', '-march=native'];
const sources = path.dirname(fileURLToPath(import.meta.url));
const programs = new Map<string, string>();
let folder: string | undefined;

/** The compiler's version line, or null without one: then there is no baseline. */
export function compilerVersion(): string | null {
  const { status, stdout } = spawnSync('gcc', ['--version'], { encoding: 'utf8' });
  return status === 0 ? stdout.split('\n')[0]! : null;
}

function program(name: string): string {
  const known = programs.get(name);
  if (known) return known;
  folder ??= mkdtempSync(path.join(os.tmpdir(), 'burette-bench-'));
  const target = path.join(folder, name);
  execFileSync('gcc', [...compilerFlags, '-o', target, path.join(sources, `${name}.c`), '-lm']);
  programs.set(name, target);
  return target;
}

export interface Measured {
  events: number;
  /** Processor time. */
  seconds: number;
}

export interface RunSize {
  replicates: number;
  seed: number;
  horizon: number;
  gridIntervals: number;
}

export function runBaseline(name: string, { replicates, seed, horizon, gridIntervals }: RunSize, input = ''): Measured {
  const sizes = [replicates, seed, horizon, gridIntervals].map(String);
  const [events, seconds] = execFileSync(program(name), sizes, { input, encoding: 'utf8' }).split(' ').map(Number);
  return { events: events!, seconds: seconds! };
}

/** A mass-action network as the table-driven programs read it. */
export function networkTable(network: ResolvedNetwork): string {
  const pairs = (list: { species: number; count: number }[]): string =>
    [list.length, ...list.map(({ species, count }) => `${species} ${count}`)].join(' ');
  const lines = network.reactions.map(({ law, reactants, changes }) => {
    if (law.kind !== 'massAction' || law.constant.kind !== 'parameter') throw new Error('mass action only');
    return `${network.parameters[law.constant.index]!.value} ${pairs(reactants)} ${pairs(changes)}`;
  });
  const counts = network.species.map(({ initialCount }) => initialCount).join(' ');
  return [`${network.species.length} ${network.reactions.length}`, counts, ...lines].join('\n');
}
