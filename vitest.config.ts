import { realpathSync } from 'node:fs';
import vue from '@vitejs/plugin-vue';
import { defineConfig } from 'vitest/config';

const browser = { environment: 'node' as const, globalSetup: ['tests/api/setup/database.ts', 'tests/e2e/support/demoTemplate.ts'], testTimeout: 240_000, hookTimeout: 240_000, pool: 'forks' as const, maxWorkers: 1, fileParallelism: false, sequence: { groupOrder: 2 } };

// One project per world: the core needs no services, the API needs PostgreSQL, the client a DOM, e2e a browser. The main job's
// journey runs with every test; the other journeys and the tour of all screens take long: npm run journeys.
export default defineConfig({
  plugins: [vue()],
  // Packages that are a symbolic link lie outside of the checkout by their real name, and files taken by address from there are refused.
  server: { fs: { allow: [import.meta.dirname, realpathSync('node_modules')] } },
  test: {
    projects: [
      { extends: true, test: { name: 'core', include: ['tests/core/**/*.test.ts', 'tests/architecture/**/*.test.ts'], environment: 'node', testTimeout: 60_000 } },
      { extends: true, test: { name: 'api', include: ['tests/api/**/*.test.ts'], environment: 'node', globalSetup: ['tests/api/setup/database.ts'], testTimeout: 60_000, hookTimeout: 60_000, pool: 'forks', maxWorkers: 2, sequence: { groupOrder: 1 } } },
      { extends: true, test: { name: 'client', include: ['tests/client/**/*.test.ts'], environment: 'happy-dom', testTimeout: 30_000 } },
      { extends: true, test: { ...browser, name: 'e2e', include: ['tests/e2e/journey.test.ts', 'tests/e2e/phoneScript.test.ts'] } },
      { extends: true, test: { ...browser, name: 'journeys', include: ['tests/e2e/**/*.test.ts'], exclude: ['tests/e2e/journey.test.ts', 'tests/e2e/phoneScript.test.ts'] } },
    ],
  },
});
