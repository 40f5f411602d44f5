import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core';
import { createTestDatabase } from '../../api/setup/testDatabase.ts';

const root = resolve(import.meta.dirname, '../../..');
const startLimitMs = 120_000;

export interface Application {
  url: string;
  browser: Browser;
  /** A person's own browser: signs in through the door and is somewhere in the estate. */
  signIn: (role: string, options?: { phone?: boolean }) => Promise<{ page: Page; context: BrowserContext; estateId: string }>;
  close: () => Promise<void>;
}

/** The built application with the demo estate, as npm start serves it, and a headless browser beside it. */
export async function startApplication(): Promise<Application> {
  const database = await createTestDatabase();
  const folder = mkdtempSync(join(tmpdir(), 'patchrow-e2e-'));
  const port = await freePort();
  const env = { ...process.env, NODE_ENV: 'development', DATABASE_URL: database.url, PORT: String(port), PATCHROW_DATA: folder, PATCHROW_DEMO: '1', LOG_LEVEL: 'error', SIGN_IN_TRIES: '1000' };
  await runToEnd(join(root, 'dist/server/cli/seedDemo.js'), env);
  const server = spawn(process.execPath, [join(root, 'dist/server/server.js')], { env, stdio: ['ignore', 'ignore', 'inherit'] });
  const url = `http://127.0.0.1:${port}`;
  await answers(url);
  const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium', headless: true, args: ['--no-sandbox', '--use-angle=swiftshader', '--enable-unsafe-swiftshader', '--disable-background-networking', '--disable-component-update', '--no-first-run'] });
  return {
    url,
    browser,
    signIn: (role, options) => signIn(browser, url, { role, ...options }),
    close: async () => {
      await browser.close();
      await stop(server);
      await database.drop();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

async function signIn(browser: Browser, url: string, { role, phone = false }: { role: string; phone?: boolean }): Promise<{ page: Page; context: BrowserContext; estateId: string }> {
  const context = await browser.newContext({ locale: 'en-GB', viewport: phone ? { width: 390, height: 844 } : { width: 1440, height: 900 }, ...(phone ? { hasTouch: true } : {}) });
  const page = await context.newPage();
  page.setDefaultTimeout(45_000);
  await page.goto(`${url}/sign-in`);
  await page.getByLabel('E-mail').fill(`${role}@demo.example`);
  await page.locator('input[type=password]').fill('patchrow-demo');
  await page.locator('form button[type=submit]').click();
  await page.waitForURL(/\/e\/[0-9a-f-]{36}\//);
  return { page, context, estateId: /\/e\/([0-9a-f-]{36})\//.exec(page.url())![1]! };
}

async function runToEnd(file: string, env: NodeJS.ProcessEnv): Promise<void> {
  const child = spawn(process.execPath, [file], { env, stdio: ['ignore', 'ignore', 'inherit'] });
  const [code] = (await once(child, 'exit')) as [number];
  if (code !== 0) throw new Error(`${file} ended with ${code}`);
}

async function answers(url: string): Promise<void> {
  const until = Date.now() + startLimitMs;
  for (;;) {
    const ready = await fetch(`${url}/api/ready`).then((response) => response.ok, () => false);
    if (ready) return;
    if (Date.now() > until) throw new Error(`Nothing answers at ${url}`);
    await new Promise((wait) => setTimeout(wait, 200));
  }
}

async function stop(server: ChildProcess): Promise<void> {
  const ended = once(server, 'exit');
  server.kill('SIGTERM');
  await Promise.race([ended, new Promise((wait) => setTimeout(wait, 5000))]);
  if (server.exitCode === null) server.kill('SIGKILL');
}

function freePort(): Promise<number> {
  return new Promise((done, fail) => {
    const probe = createServer().once('error', fail).listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() => done(typeof address === 'object' && address ? address.port : 0));
    });
  });
}
