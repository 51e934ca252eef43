// Two things the framework does not do by itself: serve through src/server.ts (boot before the first request), and
// bundle workers/*.ts for Piscina.
import { fileURLToPath } from 'node:url';
import path from 'node:path';
import * as esbuild from 'esbuild';

const root = path.dirname(fileURLToPath(import.meta.url));

/** Where the workers' bundles go. `src/server/jobs/worker-file.ts` looks in the same places. */
export const workerOutputs = {
  /** @param {string} outDir */
  build: (outDir) => path.join(outDir, 'workers'),
  development: path.join(root, 'node_modules/.cache/burette-workers'),
};

/**
 * @param {string} outdir
 * @returns {import('esbuild').BuildOptions}
 */
export const workerBuildOptions = (outdir) => ({
  entryPoints: ['run-batch', 'write-results'].map((name) => path.join(root, `workers/${name}.ts`)),
  outdir,
  outExtension: { '.js': '.mjs' },
  bundle: true,
  packages: 'external',
  format: 'esm',
  platform: 'node',
  target: 'node20',
  sourcemap: true,
  logLevel: 'warning',
});

/** Wraps the node adapter so that our own entry starts the server. */
export function buretteServer(adapter) {
  const configDone = adapter.hooks['astro:config:done'];
  return {
    ...adapter,
    hooks: {
      ...adapter.hooks,
      'astro:config:done': (options) =>
        configDone({
          ...options,
          setAdapter: (settings) =>
            options.setAdapter({ ...settings, serverEntrypoint: path.join(root, 'src/server.ts'), exports: [] }),
        }),
      'astro:server:setup': async ({ server }) => {
        // Vitest borrows the configuration without serving anything.
        if (process.env.VITEST) return;
        const context = await esbuild.context(workerBuildOptions(workerOutputs.development));
        await context.rebuild();
        await context.watch();
        server.httpServer?.once('listening', async () => {
          const { bootServer } = await server.ssrLoadModule('/src/server/boot.ts');
          await bootServer();
        });
        server.httpServer?.once('close', () => void context.dispose());
      },
      'astro:build:done': async (options) => {
        await adapter.hooks['astro:build:done']?.(options);
        const outDir = path.resolve(root, process.env.BURETTE_OUT_DIR ?? 'dist');
        await esbuild.build(workerBuildOptions(workerOutputs.build(outDir)));
      },
    },
  };
}
