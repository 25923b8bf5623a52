import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    projects: [
      {
        test: {
          name: 'quick',
          environment: 'node',
          include: ['tests/unit/**/*.test.{ts,tsx}'],
          testTimeout: 20_000,
        },
      },
      {
        test: {
          name: 'slow',
          environment: 'node',
          include: ['tests/slow/**/*.test.ts'],
          testTimeout: 180_000,
        },
      },
    ],
  },
});
