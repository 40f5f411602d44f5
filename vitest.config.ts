import vue from '@vitejs/plugin-vue';
import { defineConfig } from 'vitest/config';

// Four projects, one per world: the core needs no services, the API needs PostgreSQL, the client a DOM, e2e a browser.
export default defineConfig({
  plugins: [vue()],
  test: {
    projects: [
      { extends: true, test: { name: 'core', include: ['tests/core/**/*.test.ts', 'tests/architecture/**/*.test.ts'], environment: 'node', testTimeout: 60_000 } },
      { extends: true, test: { name: 'api', include: ['tests/api/**/*.test.ts'], environment: 'node', globalSetup: ['tests/api/setup/database.ts'], testTimeout: 60_000, hookTimeout: 60_000, pool: 'forks', maxWorkers: 2, sequence: { groupOrder: 1 } } },
      { extends: true, test: { name: 'client', include: ['tests/client/**/*.test.ts'], environment: 'happy-dom', testTimeout: 30_000 } },
      { extends: true, test: { name: 'e2e', include: ['tests/e2e/**/*.test.ts'], environment: 'node', globalSetup: ['tests/api/setup/database.ts', 'tests/e2e/support/demoTemplate.ts'], testTimeout: 240_000, hookTimeout: 240_000, pool: 'forks', maxWorkers: 1, fileParallelism: false, sequence: { groupOrder: 2 } } },
    ],
  },
});
