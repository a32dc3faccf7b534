import react from '@vitejs/plugin-react';
import tailwindcss from '@tailwindcss/vite';
import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url));
const apiPort = Number(process.env['PORT'] ?? 4680);

/** One file for the client's build and for the tests that run without a browser. */
export default defineConfig({
  root: here('./client'),
  plugins: [react(), tailwindcss()],
  resolve: {
    alias: {
      '@shared': here('./shared'),
      '@server': here('./server'),
      '@client': here('./client/src'),
    },
  },
  build: {
    outDir: here('./dist/client'),
    emptyOutDir: true,
    sourcemap: false,
    target: 'es2022',
    // kB. The scene's library is one piece of 700 kB, fetched only where a scene is shown.
    chunkSizeWarningLimit: 1000,
    rolldownOptions: {
      // What changes with its version alone stands apart from what changes with every build, so browsers keep it.
      output: {
        codeSplitting: {
          groups: [
            { name: 'react', test: /node_modules\/(react|react-dom|react-router|react-router-dom|scheduler)\// },
            { name: 'schemas', test: /node_modules\/zod\// },
          ],
        },
      },
    },
  },
  server: {
    proxy: {
      '/api': `http://127.0.0.1:${apiPort}`,
      '/live': { target: `ws://127.0.0.1:${apiPort}`, ws: true },
    },
  },
  test: {
    root: here('.'),
    include: ['tests/**/*.test.{ts,tsx}', 'shared/**/*.test.ts', 'server/**/*.test.ts', 'client/**/*.test.{ts,tsx}'],
    testTimeout: 60_000,
    hookTimeout: 120_000,
    // A condition that is waited for comes in its own time on a machine that does other things too.
    expect: { poll: { timeout: 20_000 } },
    pool: 'forks',
    maxWorkers: 2,
  },
});
