import { defineConfig } from 'vitest/config'

/** The tests that mutation runs: pure rules against their unit and reference tests, nothing that needs a server. */
export default defineConfig({
  // The mutated copy is made without Nuxt's generated tsconfig, and pure rules need nothing from it.
  esbuild: { tsconfigRaw: '{}' },
  test: { include: ['tests/unit/shared/**/*.test.ts', 'tests/reference/**/*.test.ts'], environment: 'node' },
})
