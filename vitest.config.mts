import { defineConfig } from 'vitest/config';
import { fileURLToPath } from 'node:url';

export default defineConfig({
  // Tests import the library as a notebook does; here the name means the sources, so that a failing line is a source line.
  resolve: { alias: { wedgework: fileURLToPath(new URL('./kernel-lib/index.ts', import.meta.url)) } },
  test: {
    include: ['tests/**/*.test.ts'],
    exclude: ['tests/notebook/**'],
    testTimeout: 60_000,
    hookTimeout: 60_000,
    pool: 'forks',
    maxWorkers: 2,
  },
});
