import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const root = fileURLToPath(new URL('..', import.meta.url));

export default defineConfig({
  root,
  test: {
    // The build is `pretest`, in its own process: see DEVELOPERS.md.
    pool: 'threads',
    maxWorkers: 2,
    include: ['tests/**/*.test.ts'],
    benchmark: { include: ['tests/bench/**/*.bench.ts'] },
    testTimeout: 120_000,
    hookTimeout: 120_000,
    coverage: {
      provider: 'v8',
      include: ['src/**/*.ts', 'renderer/**/*.{ts,vue}'],
      exclude: ['**/vite.config.ts', '**/*.d.ts'],
      reportsDirectory: 'coverage',
    },
  },
});
