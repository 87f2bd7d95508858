import expo from 'eslint-config-expo/flat.js';
import { defineConfig } from 'eslint/config';

export default defineConfig([
  expo,
  { ignores: ['dist/**', 'data/**', '.expo/**', 'node_modules/**', 'test-results/**'] },
  { rules: { 'import/no-duplicates': 'error' } },
  {
    files: ['**/*.ts', '**/*.tsx'],
    rules: { '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_' }] },
  },
]);
