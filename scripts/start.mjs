// npm start: from a clean clone to a running application.
import path from 'node:path';
import { applicationEnv, banner, prepareDatabase } from './application.mjs';
import { ensureBuilt } from './build.mjs';
import { inState, root } from './checkout.mjs';
import { openDatabase } from './postgres.mjs';
import { nextFreePort, wantedPort } from './process/freePort.mjs';
import { builtProgram, logTail, startService, untilReady } from './process/service.mjs';
import { untilStopped } from './process/stopSignals.mjs';
import { Problem, runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

/** Address of the server for a browser on this machine; one that listens on all addresses is reached by name. */
function addressOf(port, host = process.env.HOST) {
  if (!host || ['127.0.0.1', '0.0.0.0', '::'].includes(host)) return `http://localhost:${port}`;
  return `http://${host.includes(':') ? `[${host}]` : host}:${port}`;
}

/** Runs the server; a server that ends by itself is a fault. */
async function serve(database, services) {
  const wanted = wantedPort();
  const port = await nextFreePort(wanted);
  if (port !== wanted) say(`Port ${wanted} is taken, using ${port}.`);
  const logFile = inState('server.log');
  const server = startService({ name: 'server', args: [builtProgram('server.js')], env: { ...applicationEnv(database), PORT: String(port) }, logFile });
  services.push(server);
  await untilReady(server, { url: `${addressOf(port)}/api/ready`, logFile });
  console.log(banner({ address: addressOf(port), logFile: path.relative(root, logFile) }));
  const { code, signal } = await server.ended;
  throw new Problem(`The server ended (${signal ?? `exit code ${code}`}):\n${logTail(logFile)}`);
}

await runMain(async () => {
  const services = [];
  let opening = null;
  const stopped = untilStopped({ onSecondSignal: () => services.forEach((service) => service.kill()) });
  const work = async () => {
    wantedPort();
    await setUp({ database: !process.env.DATABASE_URL });
    await ensureBuilt();
    say('Starting the database …');
    opening = openDatabase('npm start');
    const database = await opening;
    await prepareDatabase(database);
    say('Starting the server …');
    await serve(database, services);
  };
  try {
    await Promise.race([work(), stopped.then(() => say('Stopping …'))]);
  } finally {
    await Promise.all(services.map((service) => service.stop()));
    const database = await opening?.catch(() => null);
    await database?.close();
  }
});
process.exit();
