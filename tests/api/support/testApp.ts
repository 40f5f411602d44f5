import type { Express } from 'express';
import type { Knex } from 'knex';
import pg from 'pg';
import supertest from 'supertest';
import { expect } from 'vitest';
import { makeApp } from '../../../server/app.ts';
import { readConfig, type Config } from '../../../server/config.ts';
import { openDatabase } from '../../../server/db.ts';
import { hashPassword } from '../../../server/access/passwords.ts';
import { Membership } from '../../../server/models/Membership.ts';
import { Person } from '../../../server/models/Person.ts';
import { createEstate } from '../../../server/services/estates.ts';
import { newEstate } from '../../../shared/contracts/estate.ts';
import type { Role } from '../../../shared/catalog/roles.ts';
import { createTestDatabase } from '../setup/testDatabase.ts';
import { holdToDescription } from './describedAnswers.ts';

export const testPassword = 'a long enough password';

export interface Agent {
  get: (path: string) => supertest.Test;
  post: (path: string, body?: object) => supertest.Test;
  put: (path: string, body?: object) => supertest.Test;
  patch: (path: string, body?: object) => supertest.Test;
  delete: (path: string, body?: object) => supertest.Test;
  /** A write without a body yet: for uploads and own headers. */
  write: (method: 'post' | 'put' | 'patch' | 'delete', path: string) => supertest.Test;
}

export interface TestApp {
  server: Express;
  knex: Knex;
  config: Config;
  /** For tests that need a real line instead of supertest's. */
  application: ReturnType<typeof makeApp>;
  /** A browser with its own cookies; every write carries the token of its session. */
  browser: () => Promise<Agent & { signIn: (email: string, password?: string) => Promise<supertest.Response> }>;
  addPerson: (estateId: string, role: Role, name?: string) => Promise<{ id: string; email: string }>;
  addEstate: (name?: string) => Promise<{ estateId: string; ownerEmail: string; ownerId: string }>;
  as: (email: string) => Promise<Agent>;
  close: () => Promise<void>;
}

/** The real application on a fresh copy of the real schema, spoken to over HTTP. */
export async function startTestApp(env: Record<string, string> = {}): Promise<TestApp> {
  const database = await createTestDatabase();
  const config = readConfig({ NODE_ENV: 'test', DATABASE_URL: database.url, LOG_LEVEL: 'error', SIGN_IN_TRIES: '1000', PATCHROW_DEMO: '1', ...env });
  const knex = openDatabase(database.url, 5);
  const sessionPool = new pg.Pool({ connectionString: database.url, max: 2 });
  const app = makeApp(config, { isReady: () => Promise.resolve(true), sessionPool, clientFolder: null });
  const held = holdToDescription(app);
  let serial = 0;

  const browser: TestApp['browser'] = async () => {
    const agent = supertest.agent(held.server);
    let token = (await agent.get('/api/session')).body.csrfToken as string;
    const write: Agent['write'] = (method, path) => agent[method](path).set('x-csrf-token', token);
    const send = (method: 'post' | 'put' | 'patch' | 'delete') => (path: string, body?: object) => (body ? write(method, path).send(body) : write(method, path));
    return {
      get: (path) => agent.get(path),
      post: send('post'),
      put: send('put'),
      patch: send('patch'),
      delete: send('delete'),
      write,
      signIn: async (email, password = testPassword) => {
        const response = await send('post')('/api/session', { email, password });
        if (response.status === 200) token = response.body.csrfToken as string;
        return response;
      },
    };
  };

  const addPerson: TestApp['addPerson'] = async (estateId, role, name = `${role} ${++serial}`) => {
    const email = `${role}.${++serial}@test.example`;
    const person = await Person.query().insert({ name, email, passwordHash: await passwordHash() });
    await Membership.query().insert({ estateId, personId: person.id, role });
    return { id: person.id, email };
  };

  const addEstate: TestApp['addEstate'] = async (name = `Estate ${++serial}`) => {
    const ownerEmail = `owner.${++serial}@test.example`;
    const owner = await Person.query().insert({ name: `Owner ${serial}`, email: ownerEmail, passwordHash: await passwordHash() });
    const estateId = await createEstate(owner.id, newEstate.parse({ name }), '2026-09-03');
    return { estateId, ownerEmail, ownerId: owner.id };
  };

  return {
    server: app,
    knex,
    config,
    application: app,
    browser,
    addPerson,
    addEstate,
    as: async (email) => {
      const one = await browser();
      const response = await one.signIn(email);
      if (response.status !== 200) throw new Error(`Sign-in of ${email} failed: ${response.text}`);
      return one;
    },
    close: async () => {
      await sessionPool.end();
      await knex.destroy();
      await database.drop();
      expect(held.faults()).toEqual([]);
    },
  };
}

let hashed: Promise<string> | null = null;
function passwordHash(): Promise<string> {
  return (hashed ??= hashPassword(testPassword));
}
