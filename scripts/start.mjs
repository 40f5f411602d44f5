// npm start: from a clean clone to a running application.
import path from 'node:path';
import { applicationEnv, banner, prepareDatabase } from './application.mjs';
import { ensureBuilt } from './build.mjs';
import { inState, root } from './checkout.mjs';
import { openDatabase } from './postgres.mjs';
import { nextFreePort, wantedPort } from './process/freePort.mjs';
import { runUntilStopped } from './process/runUntilStopped.mjs';
import { builtProgram, startService, untilReady } from './process/service.mjs';
import { runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

/** Address of the server for a browser on this machine; one that listens on all addresses is reached by name. */
function addressOf(port, host = process.env.HOST) {
  if (!host || ['127.0.0.1', '0.0.0.0', '::'].includes(host)) return `http://localhost:${port}`;
  return `http://${host.includes(':') ? `[${host}]` : host}:${port}`;
}

/** The same for this program, by number: no name has to be found first, and none of another listener can be meant. */
function ownAddress(port, host = process.env.HOST) {
  const number = { '': '127.0.0.1', '0.0.0.0': '127.0.0.1', '::': '[::1]' }[host ?? ''];
  return number ? `http://${number}:${port}` : addressOf(port, host);
}

/** Starts the server and says where it is. */
async function serve(database, keep) {
  const wanted = wantedPort();
  const port = await nextFreePort(wanted);
  if (port !== wanted) say(`Port ${wanted} is taken, using ${port}.`);
  say('Starting the server …');
  const logFile = inState('server.log');
  const server = keep(startService({ name: 'server', args: [builtProgram('server.js')], env: { ...applicationEnv(database), PORT: String(port) }, logFile }));
  await untilReady(server, { url: `${ownAddress(port)}/api/ready`, logFile });
  console.log(banner({ address: addressOf(port), logFile: path.relative(root, logFile) }));
  return server;
}

await runMain(() => runUntilStopped(async (keep) => {
  wantedPort();
  await setUp({ database: !process.env.DATABASE_URL });
  await ensureBuilt();
  say('Starting the database …');
  const database = await keep(openDatabase('npm start'));
  await prepareDatabase(database);
  const server = await serve(database, keep);
  await server.untilFault();
}));
process.exit();
