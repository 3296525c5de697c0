import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    root: '.',
    include: ['tests/**/*.long.test.ts'],
    testTimeout: 300_000,
    hookTimeout: 300_000,
    reporters: ['default'],
  },
});
