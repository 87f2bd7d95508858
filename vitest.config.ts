import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

export default defineConfig({
  resolve: { alias: { '@': fileURLToPath(new URL('.', import.meta.url)).replace(/\/$/, '') } },
  test: {
    include: ['**/*.test.ts'],
    exclude: ['node_modules/**', 'dist/**', 'tests/e2e/**', 'data/**'],
    testTimeout: 60_000,
    pool: 'forks',
  },
});
