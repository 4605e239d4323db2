/** How the page is built, previewed and unit-tested. */
import { fileURLToPath } from 'node:url';
import react from '@vitejs/plugin-react';
import type { Plugin } from 'vite';
import { defineConfig } from 'vitest/config';

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url));

/** Everything comes from the page's own folder; nothing is inlined and nothing leaves. */
const policy = [
  "default-src 'none'",
  "script-src 'self'",
  "style-src 'self'",
  "img-src 'self'",
  "font-src 'none'",
  "connect-src 'none'",
  "worker-src 'self'",
  "manifest-src 'self'",
  "base-uri 'none'",
  "form-action 'none'",
].join('; ');

/**
 * The policy as a meta tag, so that it holds on any file server. In the built page only: the
 * development server puts scripts of its own into the page.
 */
const policyTag: Plugin = {
  name: 'content-security-policy',
  apply: 'build',
  transformIndexHtml: () => [
    {
      tag: 'meta',
      attrs: { 'http-equiv': 'Content-Security-Policy', content: policy },
      injectTo: 'head-prepend',
    },
  ],
};

export default defineConfig({
  root: here('app'),
  publicDir: here('public'),
  // Relative, so that the built site can be served from any folder.
  base: './',
  plugins: [react(), policyTag],
  worker: {
    format: 'es',
    // Constants stay constants: the solver's loops are twice as fast when the compiler may rely
    // on the arrays of its working store never being exchanged.
    rolldownOptions: { output: { topLevelVar: false } },
  },
  build: {
    outDir: here('dist'),
    emptyOutDir: true,
    // The policy admits no fonts from data: addresses, so nothing is turned into one.
    assetsInlineLimit: 0,
  },
  preview: {
    host: '127.0.0.1',
    port: 4173,
    headers: {
      // A meta tag governs neither workers nor framing; a header does both.
      'Content-Security-Policy': `${policy}; frame-ancestors 'none'`,
      'X-Content-Type-Options': 'nosniff',
      'Referrer-Policy': 'no-referrer',
    },
  },
  test: {
    root: here('.'),
    environment: 'node',
    include: ['tests/**/*.test.{ts,tsx}'],
    testTimeout: 60_000,
    // Threads rather than processes: a test that never returns dies with the run.
    pool: 'threads',
    maxWorkers: 2,
  },
});
