import { defineConfig } from 'vitest/config';

export default defineConfig({
  define: { POLEWISE_VERSION: JSON.stringify('0.0.0-test') },
  test: {
    include: ['tests/**/*.test.ts'],
    testTimeout: 60_000,
    // Left to itself it leaves a core free: of two that is half.
    maxWorkers: '100%',
    reporters: ['default'],
  },
});
