/** The worker's bundle, made anew for this run, so that the bench measures the sources at hand. */
import path from 'node:path';
import * as esbuild from 'esbuild';
import { workerBuildOptions } from '../../astro.integration.mjs';
import { projectRoot } from '@/server/project-root.ts';

let built: Promise<string> | undefined;

export const benchWorkerFile = (): Promise<string> =>
  (built ??= (async () => {
    const folder = path.join(projectRoot, 'node_modules/.cache/burette-bench');
    await esbuild.build(workerBuildOptions(folder));
    return path.join(folder, 'run-batch.mjs');
  })());
