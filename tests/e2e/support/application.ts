import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { cpSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core';
import { inject } from 'vitest';
import { createTestDatabase } from '../../api/setup/testDatabase.ts';

const root = resolve(import.meta.dirname, '../../..');
const startLimitMs = 120_000;

export interface Application {
  url: string;
  browser: Browser;
  /** A person's own browser: signs in through the door and is somewhere in the estate. */
  signIn: (role: string, options?: { phone?: boolean }) => Promise<{ page: Page; context: BrowserContext; estateId: string }>;
  /** A browser of somebody who has not signed in. */
  visit: (options?: { phone?: boolean }) => Promise<{ page: Page; context: BrowserContext }>;
  close: () => Promise<void>;
}

/** The built application with the demo estate, as npm start serves it, and a headless browser beside it. */
export async function startApplication(): Promise<Application> {
  const database = await createTestDatabase(inject('demoDatabase'));
  const folder = mkdtempSync(join(tmpdir(), 'patchrow-e2e-'));
  cpSync(inject('demoFiles'), folder, { recursive: true });
  const port = await freePort();
  const env = { ...process.env, NODE_ENV: 'development', DATABASE_URL: database.url, PORT: String(port), PATCHROW_DATA: folder, PATCHROW_DEMO: '1', LOG_LEVEL: 'error', SIGN_IN_TRIES: '1000' };
  const server = spawn(process.execPath, [join(root, 'dist/server/server.js')], { env, stdio: ['ignore', 'ignore', 'inherit'] });
  const url = `http://127.0.0.1:${port}`;
  await answers(url);
  const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium', headless: true, args: ['--no-sandbox', '--use-angle=swiftshader', '--enable-unsafe-swiftshader', '--disable-background-networking', '--disable-component-update', '--no-first-run'] });
  return {
    url,
    browser,
    signIn: (role, options) => signIn(browser, url, { role, ...options }),
    visit: (options) => visit(browser, options),
    close: async () => {
      await browser.close();
      await stop(server);
      await database.drop();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

async function visit(browser: Browser, { phone = false }: { phone?: boolean } = {}): Promise<{ page: Page; context: BrowserContext }> {
  const context = await browser.newContext({ locale: 'en-GB', viewport: phone ? { width: 390, height: 844 } : { width: 1440, height: 900 }, ...(phone ? { hasTouch: true } : {}) });
  const page = await context.newPage();
  page.setDefaultTimeout(45_000);
  return { page, context };
}

async function signIn(browser: Browser, url: string, { role, ...options }: { role: string; phone?: boolean }): Promise<{ page: Page; context: BrowserContext; estateId: string }> {
  const { page, context } = await visit(browser, options);
  await page.goto(`${url}/sign-in`);
  await page.getByLabel('E-mail').fill(`${role}@demo.example`);
  await page.locator('input[type=password]').fill('patchrow-demo');
  await page.locator('form button[type=submit]').click();
  await page.waitForURL(/\/e\/[0-9a-f-]{36}\//);
  return { page, context, estateId: /\/e\/([0-9a-f-]{36})\//.exec(page.url())![1]! };
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
