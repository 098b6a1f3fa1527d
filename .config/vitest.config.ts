import { defineConfig } from 'vitest/config';

export default defineConfig({
  root: new URL('..', import.meta.url).pathname,
  test: {
    include: ['tests/**/*.test.{ts,tsx}'],
    benchmark: { include: ['tests/**/*.bench.ts'] },
    testTimeout: 60_000,
    hookTimeout: 120_000,
    // Two cores: more processes only queue behind one another.
    maxWorkers: 2,
  },
});
