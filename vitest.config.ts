import vue from '@vitejs/plugin-vue'
import { defineConfig } from 'vitest/config'

/**
 * Three kinds of test, by what they need. `unit` (with `reference` and `meta`) needs nothing but Node;
 * `integration` needs PostgreSQL and the built server; `browser` needs Chromium besides.
 */
export default defineConfig({
  test: {
    projects: [
      { plugins: [vue()], test: { name: 'unit', include: ['tests/unit/**/*.test.ts', 'tests/reference/**/*.test.ts', 'tests/meta/**/*.test.ts'], environment: 'node' } },
      { test: { name: 'integration', include: ['tests/integration/**/*.test.ts'], environment: 'node', globalSetup: ['tests/support/global-setup.ts'], testTimeout: 60_000, hookTimeout: 120_000, fileParallelism: true } },
      { test: { name: 'browser', include: ['tests/browser/**/*.spec.ts'], environment: 'node', globalSetup: ['tests/support/global-setup.ts'], testTimeout: 180_000, hookTimeout: 180_000, fileParallelism: false } },
    ],
  },
})
