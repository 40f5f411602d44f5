// npm run dev: the server restarts and the page reloads when a source changes. Address as with npm start.
import { applicationEnv, banner, prepareDatabase } from './application.mjs';
import { inCheckout, npmProgram } from './checkout.mjs';
import { openDatabase } from './postgres.mjs';
import { anyFreePort, nextFreePort, wantedPort } from './process/freePort.mjs';
import { startService } from './process/service.mjs';
import { untilStopped } from './process/stopSignals.mjs';
import { Problem, runMain, say } from './progress.mjs';
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
  await vite.listen();
  return { vite, port };
}

await runMain(async () => {
  const services = [];
  let opening = null;
  let pages = null;
  const stopped = untilStopped({ onSecondSignal: () => services.forEach((service) => service.kill()) });
  const work = async () => {
    await setUp({ database: !process.env.DATABASE_URL });
    say('Starting the database …');
    opening = openDatabase('npm run dev');
    const database = await opening;
    await prepareDatabase(database, { from: 'source' });
    const apiPort = await anyFreePort();
    const server = startService({
      name: 'server',
      args: [npmProgram('tsx'), 'watch', '--clear-screen=false', 'server/server.ts'],
      env: { ...applicationEnv(database), HOST: '127.0.0.1', PORT: String(apiPort) },
    });
    services.push(server);
    pages = await servePages(apiPort);
    console.log(banner({ address: `http://localhost:${pages.port}`, logFile: 'this terminal' }));
    const { code, signal } = await server.ended;
    throw new Problem(`The server ended (${signal ?? `exit code ${code}`}).`);
  };
  try {
    await Promise.race([work(), stopped.then(() => say('Stopping …'))]);
  } finally {
    await pages?.vite.close();
    await Promise.all(services.map((service) => service.stop()));
    const database = await opening?.catch(() => null);
    await database?.close();
  }
});
process.exit();
