// Astro: server output behind our own entry (src/server.ts), React islands, Tailwind, a strict content security policy.
import node from '@astrojs/node';
import react from '@astrojs/react';
import tailwind from '@astrojs/tailwind';
import { fileURLToPath } from 'node:url';
import { defineConfig } from 'astro/config';
import { buretteServer } from './astro.integration.mjs';

export default defineConfig({
  output: 'server',
  outDir: process.env.BURETTE_OUT_DIR ?? './dist',
  adapter: buretteServer(node({ mode: 'standalone' })),
  integrations: [react(), tailwind({ applyBaseStyles: false })],
  // Sessions are lucia's, in our database; the framework's own are never used.
  session: { driver: 'memory' },
  // Our middleware checks Origin on every unsafe method, JSON included (src/server/http/check-origin.ts).
  security: { checkOrigin: false },
  devToolbar: { enabled: false },
  // Highlighted code carries inline styles, which the security policy refuses.
  markdown: { syntaxHighlight: false },
  server: { port: Number(process.env.PORT ?? 4321), host: process.env.HOST ?? '127.0.0.1' },
  vite: {
    // The framework reads tsconfig's aliases for pages; bundles of browser workers need this one said again.
    resolve: { alias: [{ find: /^@\//, replacement: fileURLToPath(new URL('./src/', import.meta.url)) }] },
    worker: { format: 'es' },
    ssr: {
      noExternal: ['echarts-for-react'],
      external: ['sequelize', 'sqlite3', 'umzug', 'piscina', 'pdfkit', 'pino'],
    },
    optimizeDeps: { exclude: ['sqlite3', 'sequelize'] },
    // Small fonts would become data: addresses, which the security policy below does not allow.
    build: { chunkSizeWarningLimit: 900, assetsInlineLimit: 0 },
  },
  experimental: {
    csp: {
      scriptDirective: { resources: ["'self'", "'wasm-unsafe-eval'"] },
      styleDirective: { resources: ["'self'"] },
      directives: [
        "default-src 'self'",
        "img-src 'self' data: blob:",
        "font-src 'self'",
        "connect-src 'self'",
        "worker-src 'self' blob:",
        "object-src 'none'",
        "base-uri 'none'",
        "form-action 'self'",
        "frame-ancestors 'none'",
      ],
    },
  },
});
