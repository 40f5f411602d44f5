// npm run dev: the server restarts and the page reloads when a source changes. Address as with npm start.
import { applicationEnv, banner, prepareDatabase } from './application.mjs';
import { inCheckout, npmProgram } from './checkout.mjs';
import { openDatabase } from './postgres.mjs';
import { anyFreePort, nextFreePort, wantedPort } from './process/freePort.mjs';
import { runUntilStopped } from './process/runUntilStopped.mjs';
import { startService } from './process/service.mjs';
import { runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

/** Vite's own server in this process: pages from source, /api passed on to the application. */
async function servePages(apiPort) {
  const { createServer } = await import('vite');
  const port = await nextFreePort(wantedPort());
  const vite = await createServer({
    root: inCheckout(),
    logLevel: 'warn',
    server: { port, strictPort: true, host: process.env.HOST ?? '127.0.0.1', proxy: { '/api': { target: `http://127.0.0.1:${apiPort}` } } },
  });
  return vite.listen();
}

await runMain(() => runUntilStopped(async (keep) => {
  await setUp({ database: !process.env.DATABASE_URL });
  say('Starting the database …');
  const database = await keep(openDatabase('npm run dev'));
  await prepareDatabase(database, { from: 'source' });
  const apiPort = await anyFreePort();
  const server = keep(startService({
    name: 'server',
    args: [npmProgram('tsx'), 'watch', '--clear-screen=false', 'server/server.ts'],
    env: { ...applicationEnv(database), HOST: '127.0.0.1', PORT: String(apiPort) },
  }));
  const pages = await keep(servePages(apiPort));
  console.log(banner({ address: `http://localhost:${pages.config.server.port}`, logFile: 'this terminal' }));
  await server.untilFault();
}));
process.exit();
