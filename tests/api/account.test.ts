import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { MailMessage } from '../../server/models/MailMessage.ts';
import { PasswordReset } from '../../server/models/PasswordReset.ts';
import { startTestApp, testPassword, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Marl test');
});
afterAll(() => app.close());

const next = 'another long password';

async function ask(email: string): Promise<{ status: number; body: unknown }> {
  const { status, body } = await (await app.browser()).post('/api/password-resets', { email }).set('host', 'localhost');
  return { status, body };
}

async function newestLink(email: string): Promise<string> {
  const mail = await MailMessage.query().where({ toAddress: email, kind: 'reset' }).orderBy('createdAt', 'desc').first();
  return /\/reset\/(\S+)/.exec(mail?.bodyText ?? '')?.[1] ?? '';
}

describe('a forgotten password', () => {
  let person: { id: string; email: string };
  beforeEach(async () => {
    person = await app.addPerson(estate.estateId, 'agronomist');
  });

  it('is answered alike for an address that is known and one that is not', async () => {
    const [known, unknown] = [await ask(person.email), await ask('nobody@test.example')];
    expect(known).toEqual(unknown);
    expect(known.status).toBe(202);
    expect(await newestLink('nobody@test.example')).toBe('');
  });

  it('is set anew once with the link, and every place where one was signed in is closed', async () => {
    const before = await app.as(person.email);
    await ask(person.email.toUpperCase());
    const token = await newestLink(person.email);
    const one = await app.browser();
    expect((await one.get(`/api/password-resets/${token}`)).body).toEqual({ email: person.email });
    expect((await one.post('/api/password-resets/use', { token, password: 'short' })).body.errors[0].path).toBe('password');
    expect((await one.post('/api/password-resets/use', { token, password: next })).status).toBe(204);
    expect((await before.get('/api/account/sessions')).status).toBe(401);
    expect((await (await app.browser()).signIn(person.email, next)).status).toBe(200);
    expect((await (await app.browser()).signIn(person.email)).status).toBe(401);
    const again = await one.post('/api/password-resets/use', { token, password: 'yet another password' });
    expect([again.status, again.body.code]).toEqual([409, 'usedReset']);
    const written = await AuditEntry.query().where({ subjectId: person.id }).orderBy('id');
    expect(written.map(({ action }) => action)).toEqual(['account.askReset', 'account.reset']);
    expect(await MailMessage.query().where({ toAddress: person.email, kind: 'passwordChanged' }).resultSize()).toBe(1);
  });

  it('cannot be set with a link that ran out or was made up', async () => {
    await ask(person.email);
    const token = await newestLink(person.email);
    await PasswordReset.query().where({ personId: person.id }).patch({ expiresAt: new Date('2020-01-01') });
    const one = await app.browser();
    expect((await one.post('/api/password-resets/use', { token, password: next })).body.code).toBe('expiredReset');
    expect((await one.get(`/api/password-resets/${'a'.repeat(43)}`)).status).toBe(404);
  });

  it('fills nobody’s letter box: three links an hour, and the secret of none is stored', async () => {
    for (let time = 0; time < 5; time++) await ask(person.email);
    expect(await MailMessage.query().where({ toAddress: person.email, kind: 'reset' }).resultSize()).toBe(3);
    const token = await newestLink(person.email);
    expect(JSON.stringify(await PasswordReset.query().where({ personId: person.id }))).not.toContain(token);
  });

  it('writes no link to an address that the request itself made up for this server', async () => {
    const answer = await (await app.browser()).post('/api/password-resets', { email: person.email }).set('host', 'elsewhere.example');
    expect(answer.status).toBe(202);
    expect(await newestLink(person.email)).toBe('');
  });

  it('never shows an owner’s link in the outbox of the estate, and another’s only while nothing else delivers it', async () => {
    await ask(estate.ownerEmail);
    await ask(person.email);
    const token = await newestLink(person.email);
    const owner = await app.as(estate.ownerEmail);
    const outbox = async () => (await owner.get(`/api/estates/${estate.estateId}/mail`)).body.items as { to: string; kind: string; text: string }[];
    expect((await outbox()).filter(({ to }) => to === estate.ownerEmail)).toEqual([]);
    expect((await outbox()).find(({ to }) => to === person.email)!.text).toContain(token);
    await MailMessage.query().where({ toAddress: person.email }).patch({ state: 'sent' });
    expect((await outbox()).find(({ to }) => to === person.email)!.text).not.toContain(token);
  });
});

describe('one’s own account', () => {
  it('lists where one is signed in, ends one place and all others, and gives no id away', async () => {
    const { email } = await app.addPerson(estate.estateId, 'winemaker');
    const [here, there, third] = [await app.as(email), await app.as(email), await app.as(email)];
    const listed = (await here.get('/api/account/sessions')).body.items as { key: string; isThis: boolean; signedInAt: string }[];
    expect(listed.map(({ isThis }) => isThis).filter(Boolean)).toHaveLength(1);
    expect(listed).toHaveLength(3);
    const stored = (await app.knex('sessions').select('sid')) as { sid: string }[];
    expect(stored.some(({ sid }) => JSON.stringify(listed).includes(sid))).toBe(false);
    const other = (await there.get('/api/account/sessions')).body.items.find((one: { isThis: boolean }) => one.isThis) as { key: string };
    expect((await here.delete(`/api/account/sessions/${other.key}`)).status).toBe(204);
    expect((await there.get('/api/account/sessions')).status).toBe(401);
    expect((await here.delete('/api/account/sessions')).body).toEqual({ ended: 1 });
    expect((await third.get('/api/account/sessions')).status).toBe(401);
    expect((await here.get('/api/account/sessions')).status).toBe(200);
  });

  it('cannot end the session of somebody else', async () => {
    const [one, other] = [await app.addPerson(estate.estateId, 'lab'), await app.addPerson(estate.estateId, 'lab')];
    const theirs = await app.as(other.email);
    const { key } = ((await theirs.get('/api/account/sessions')).body.items as { key: string }[])[0]!;
    expect((await (await app.as(one.email)).delete(`/api/account/sessions/${key}`)).status).toBe(404);
    expect((await theirs.get('/api/account/sessions')).status).toBe(200);
  });

  it('changes the password with the old one: this place stays, the others end', async () => {
    const { id, email } = await app.addPerson(estate.estateId, 'manager');
    const [here, there] = [await app.as(email), await app.as(email)];
    const refused = await here.put('/api/account/password', { currentPassword: 'not this', password: next });
    expect([refused.status, refused.body.code]).toEqual([422, 'wrongPassword']);
    expect((await here.put('/api/account/password', { currentPassword: testPassword, password: next })).body).toEqual({ ended: 1 });
    expect((await here.get('/api/account/sessions')).status).toBe(200);
    expect((await there.get('/api/account/sessions')).status).toBe(401);
    expect((await AuditEntry.query().findOne({ subjectId: id }))!.action).toBe('account.password');
  });

  it('is signed out at once when the last access ends', async () => {
    const { id, email } = await app.addPerson(estate.estateId, 'crew');
    const theirs = await app.as(email);
    await (await app.as(estate.ownerEmail)).put(`/api/estates/${estate.estateId}/people/${id}/roles`, { roles: [] });
    expect((await theirs.get('/api/account/sessions')).status).toBe(401);
  });

  it('is closed to somebody who is not signed in', async () => {
    const one = await app.browser();
    expect((await one.get('/api/account/sessions')).status).toBe(401);
    expect((await one.delete('/api/account/sessions')).status).toBe(401);
    expect((await one.put('/api/account/password', { currentPassword: 'x', password: next })).status).toBe(401);
  });
});
