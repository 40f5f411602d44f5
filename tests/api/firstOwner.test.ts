import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Estate } from '../../server/models/Estate.ts';
import { Person } from '../../server/models/Person.ts';
import { makeOwner } from '../../server/services/account/firstOwner.ts';
import { linkFor } from '../../server/services/account/resetPassword.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

let app: TestApp;
beforeAll(async () => {
  app = await startTestApp();
});
afterAll(() => app.close());

const password = 'a long password for vines';
const now = new Date();

describe('whoever runs the server', () => {
  it('makes the first owner with an estate; the link sets the password and lets them in', async () => {
    const made = await makeOwner({ email: 'first@marl.example', name: 'First Owner', estate: { name: 'Marl First', timeZone: 'Europe/Lisbon', languages: ['pt'] } }, now);
    expect(made).toEqual({ madePerson: true, madeEstate: true });
    const token = await linkFor('first@marl.example', now);
    const browser = await app.browser();
    expect((await browser.post('/api/password-resets/use', { token, password })).status).toBe(204);
    expect((await browser.signIn('first@marl.example', password)).status).toBe(200);
    const session = (await browser.get('/api/session')).body as object;
    expect(JSON.stringify(session)).toContain('Marl First');
    expect((await Person.query().findOne({ email: 'first@marl.example' }))?.language).toBe('pt');
  });

  it('gives somebody known a new link, noted in the history, and makes nothing', async () => {
    const estate = await app.addEstate('Marl second');
    const person = await app.addPerson(estate.estateId, 'owner');
    expect(await makeOwner({ email: person.email, name: null, estate: null }, now)).toEqual({ madePerson: false, madeEstate: false });
    await linkFor(person.email, now);
    expect((await AuditEntry.query().where({ subjectId: person.id })).map(({ action }) => action)).toEqual(['account.askReset']);
  });

  it('makes nothing when a name is missing or a fact is wrong', async () => {
    await expect(makeOwner({ email: 'half@marl.example', name: null, estate: null }, now)).rejects.toThrow('--name and --estate');
    await expect(makeOwner({ email: 'half@marl.example', name: 'Half', estate: { name: 'Half', timeZone: 'Europe/Nowhere' } }, now)).rejects.toThrow('time zone');
    await expect(linkFor('half@marl.example', now)).rejects.toThrow('Nobody is known');
    expect([await Person.query().where({ email: 'half@marl.example' }).resultSize(), await Estate.query().where({ name: 'Half' }).resultSize()]).toEqual([0, 0]);
  });
});
