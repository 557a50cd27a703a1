import { fileURLToPath } from 'node:url';
import react from '@vitejs/plugin-react';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vitest/config';

const here = (file: string) => fileURLToPath(new URL(file, import.meta.url));

const clientBuild = {
  outDir: 'dist/client',
  emptyOutDir: true,
  chunkSizeWarningLimit: 1500,
};
const serverBuild = {
  outDir: 'dist/server',
  emptyOutDir: true,
  target: 'node20',
  sourcemap: true,
  rolldownOptions: {
    input: { index: here('server/index.ts'), rebuild: here('server/rebuild.ts') },
  },
};

/** Tests that share the throw-away MariaDB; each worker has a database of its own in it. */
const onDatabase = {
  globalSetup: ['tests/support/mariadb-global.ts'],
  setupFiles: ['tests/support/guards.ts', 'tests/support/database-setup.ts'],
};

export default defineConfig(({ isSsrBuild }) => ({
  plugins: [react(), tailwindcss()],
  build: isSsrBuild ? serverBuild : clientBuild,
  test: {
    reporters: ['default'],
    // One waits for the database while the other computes; vitest's own guess is a core less.
    maxWorkers: 2,
    projects: [
      {
        extends: true,
        test: {
          name: 'unit',
          include: [
            'tests/unit/**/*.test.{ts,tsx}',
            'tests/standards/**/*.test.ts',
            'tests/properties/**/*.test.ts',
          ],
          exclude: ['tests/properties/db/**'],
          setupFiles: ['tests/support/guards.ts'],
          testTimeout: 60_000,
        },
      },
      {
        extends: true,
        test: {
          name: 'db',
          include: [
            'tests/api/**/*.test.ts',
            'tests/faults/**/*.test.ts',
            'tests/properties/db/**/*.test.ts',
          ],
          ...onDatabase,
          testTimeout: 60_000,
          hookTimeout: 60_000,
        },
      },
      {
        extends: true,
        test: {
          name: 'browser',
          include: ['tests/browser/**/*.test.ts'],
          ...onDatabase,
          fileParallelism: false,
          testTimeout: 120_000,
          hookTimeout: 180_000,
        },
      },
    ],
  },
}));
