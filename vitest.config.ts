import { defineConfig } from 'vitest/config'

export default defineConfig({
  test: {
    include: ['test/**/*.test.ts', 'test/**/*.test.tsx'],
    globalSetup: ['test/support/build.ts'],
    reporters: ['default', './test/support/require-all.ts'],
    testTimeout: 120_000,
    hookTimeout: 180_000,
    pool: 'forks',
  },
  oxc: { jsx: { runtime: 'automatic', importSource: 'preact' } },
})
