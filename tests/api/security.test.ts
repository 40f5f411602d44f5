import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import pg from 'pg';
import supertest from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { makeApp } from '../../server/app.ts';
import { readConfig } from '../../server/config.ts';
import { routesOf } from './support/routesOf.ts';
import { startTestApp, testPassword, type TestApp } from './support/testApp.ts';

let app: TestApp;
let email: string;
let folder: string;
const pools: pg.Pool[] = [];

beforeAll(async () => {
  app = await startTestApp();
  email = (await app.addEstate()).ownerEmail;
  folder = mkdtempSync(join(tmpdir(), 'client-'));
  writeFileSync(join(folder, 'index.html'), '<!doctype html><title>Patchrow</title>');
});
afterAll(async () => {
  await Promise.all(pools.map((pool) => pool.end()));
  rmSync(folder, { recursive: true });
  await app.close();
});

/** The application with a page to serve, on the same database, as another installation would set it up. */
function served(env: Record<string, string> = {}) {
  const pool = new pg.Pool({ connectionString: app.config.databaseUrl, max: 1 });
  pools.push(pool);
  const config = readConfig({ NODE_ENV: 'test', DATABASE_URL: app.config.databaseUrl, LOG_LEVEL: 'silent', SESSION_SECRET: 'a secret of the test', ...env });
  return makeApp(config, { isReady: () => Promise.resolve(true), sessionPool: pool, clientFolder: folder });
}

const directives = (header: string) => new Map(header.split(';').map((part) => part.trim().split(/\s+/)).map(([name, ...values]) => [name!, values]));

describe('the page as it is served', () => {
  it('runs no script but its own, sits in no frame, and sends nothing elsewhere', async () => {
    const page = await supertest(served()).get('/e/anything/today');
    expect(page.status).toBe(200);
    const policy = directives(page.headers['content-security-policy'] as string);
    expect(policy.get('default-src')).toEqual(["'self'"]);
    expect(policy.get('script-src')).toEqual(["'self'"]);
    expect(policy.get('object-src')).toEqual(["'none'"]);
    expect(policy.get('base-uri')).toEqual(["'self'"]);
    expect(policy.get('form-action')).toEqual(["'self'"]);
    expect(policy.get('frame-ancestors')).toEqual(["'self'"]);
    expect([...policy.values()].flat().filter((source) => /^https?:|\*|unsafe-eval/.test(source))).toEqual([]);
    expect(page.headers['x-content-type-options']).toBe('nosniff');
    expect(page.headers['referrer-policy']).toBe('no-referrer');
    expect(page.headers['x-powered-by']).toBeUndefined();
  });

  it('asks for TLS for good only where it is served with it', async () => {
    expect((await supertest(served()).get('/')).headers['strict-transport-security']).toBeUndefined();
    expect((await supertest(served({ PUBLIC_URL: 'https://vines.example' })).get('/')).headers['strict-transport-security']).toMatch(/max-age=\d{6,}/);
  });
});

describe('the cookie of a session', () => {
  const cookieOf = (response: supertest.Response) => String((response.headers['set-cookie'] as unknown as string[] | undefined)?.[0] ?? '');

  it('is out of reach of scripts and other sites, and goes over TLS alone in production', async () => {
    const plain = cookieOf(await supertest(served()).get('/api/session'));
    expect(plain).toMatch(/HttpOnly/);
    expect(plain).toMatch(/SameSite=Lax/);
    const behindProxy = served({ NODE_ENV: 'production', TRUST_PROXY: '1' });
    expect(cookieOf(await supertest(behindProxy).get('/api/session').set('x-forwarded-proto', 'https'))).toMatch(/Secure/);
    expect(cookieOf(await supertest(behindProxy).get('/api/session').set('x-forwarded-proto', 'http'))).toBe('');
  });

  it('that was known before sign-in is worth nothing after it', async () => {
    const server = served();
    const first = await supertest(server).get('/api/session');
    const before = cookieOf(first).split(';')[0]!;
    const signedIn = await supertest(server).post('/api/session').set('cookie', before).set('x-csrf-token', first.body.csrfToken as string).send({ email, password: testPassword });
    expect(signedIn.status).toBe(200);
    expect(cookieOf(signedIn).split(';')[0]).not.toBe(before);
    expect((await supertest(server).get('/api/session').set('cookie', before)).body.person).toBeNull();
    expect((await supertest(server).get('/api/account/sessions').set('cookie', cookieOf(signedIn).split(';')[0]!)).status).toBe(200);
  });
});

describe('writes outside an estate', () => {
  it('are all refused without the token of the session', async () => {
    const one = await app.as(email);
    const writes = routesOf(app.server).filter(({ method, belowEstate }) => !belowEstate && method !== 'get' && method !== 'head');
    expect(writes.length).toBeGreaterThan(8);
    for (const { method, path } of writes) {
      const answer = await one.write(method as 'post', `/api${path.replace(/:\w+/g, 'x'.repeat(43))}`).set('x-csrf-token', 'made up').send({});
      expect([path, answer.status]).toEqual([path, 403]);
    }
  });
});

describe('guessing', () => {
  it.each([
    ['post', '/api/session', { email: 'who@test.example', password: 'guess' }, 401],
    ['post', '/api/password-resets/use', { token: 'x'.repeat(43), password: 'a long enough one' }, 404],
    ['post', '/api/password-resets', { email: 'who@test.example' }, 202],
  ] as const)('%s %s is slowed down after some tries', async (method, path, body, usual) => {
    const small = await startTestApp({ SIGN_IN_TRIES: '3' });
    const one = await small.browser();
    const statuses: number[] = [];
    for (let time = 0; time < 5; time++) statuses.push((await one[method](path, body)).status);
    await small.close();
    expect(statuses).toEqual([usual, usual, usual, 429, 429]);
  });
});
