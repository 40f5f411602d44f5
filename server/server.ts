import { existsSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import { resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import pg from 'pg';
import { makeApp } from './app.ts';
import { readConfig } from './config.ts';
import { openDatabase } from './db.ts';
import { prepareQueue } from './jobs/queue.ts';
import { startJobProcess } from './jobs/jobProcess.ts';
import { log, setLogLevel } from './log.ts';
import { makeTransport } from './mail/transport.ts';
import { openFileStore } from './storage/fileStore.ts';
import { dropForgotten } from './storage/resumable.ts';
import { closeComputePool, openComputePool } from './workers/computePool.ts';

const mailEveryMs = 5000;
const sweepEveryMs = 3_600_000;

async function main(): Promise<void> {
  const config = readConfig();
  setLogLevel(config.logLevel);
  const knex = openDatabase(config.databaseUrl);
  await prepareQueue(config.databaseUrl);
  await openFileStore(config.dataFolder);
  openComputePool(config.computeThreads);
  const jobs = startJobProcess();
  const mail = makeTransport({ smtpUrl: config.smtpUrl, from: config.mailFrom });
  const mailTimer = setInterval(() => void mail.flush(new Date()).catch((error: unknown) => log.error('mail', error)), mailEveryMs);
  const sweep = () => void dropForgotten(new Date()).catch((error: unknown) => log.error('unfinished uploads', error));
  sweep();
  const sweepTimer = setInterval(sweep, sweepEveryMs);
  const sessionPool = new pg.Pool({ connectionString: config.databaseUrl, max: 4 });
  const isReady = () => knex.raw('select 1').then(() => true, () => false);
  const server = createServer(makeApp(config, { isReady, sessionPool, clientFolder: clientFolder() }));
  await listen(server, config.port, config.host);
  log.info('listening', { address: `http://${config.host}:${portOf(server)}` });
  if (config.publicUrl === '' && (config.trustProxy > 0 || !['127.0.0.1', 'localhost', '::1'].includes(config.host))) log.info('PUBLIC_URL is not set', { means: 'mails carry links within the own network only, and none to set a new password' });

  const stop = async () => {
    clearInterval(mailTimer);
    clearInterval(sweepTimer);
    server.closeAllConnections();
    server.close();
    await jobs.stop();
    await closeComputePool();
    mail.close();
    await sessionPool.end();
    await knex.destroy();
    process.exit(0);
  };
  process.once('SIGINT', () => void stop());
  process.once('SIGTERM', () => void stop());
}

/** Built: dist/server/server.js beside dist/client. From source there is no built client, vite serves it. */
function clientFolder(): string | null {
  const folder = resolve(fileURLToPath(new URL('../client', import.meta.url)));
  return existsSync(folder) ? folder : null;
}

function listen(server: Server, port: number, host: string): Promise<void> {
  return new Promise((done, fail) => server.once('error', fail).listen(port, host, done));
}

function portOf(server: Server): number {
  const address = server.address();
  return typeof address === 'object' && address !== null ? address.port : 0;
}

main().catch((error: unknown) => {
  log.error('start failed', error);
  process.exit(1);
});
