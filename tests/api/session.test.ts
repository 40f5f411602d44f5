import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Membership } from '../../server/models/Membership.ts';
import { fr } from '../../server/sentences/fr.ts';
import { startTestApp, testPassword, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Marl test');
});
afterAll(() => app.close());

describe('the door', () => {
  it('tells nobody anything before sign-in', async () => {
    const one = await app.browser();
    expect((await one.get('/api/session')).body).toMatchObject({ person: null, estates: [] });
    expect((await one.get(`/api/estates/${estate.estateId}/people`)).status).toBe(401);
  });

  it('signs in whatever the case of the address, and rotates the session', async () => {
    const one = await app.browser();
    const before = (await one.get('/api/session')).headers['set-cookie'];
    const answer = await one.signIn(estate.ownerEmail.toUpperCase());
    expect(answer.status).toBe(200);
    expect(answer.headers['set-cookie']).not.toEqual(before);
    expect(answer.body.estates[0]).toMatchObject({ name: 'Marl test', roles: ['owner'], permissions: { 'people.manage': 'do' }, season: { name: '2026' } });
    expect(String(answer.headers['set-cookie'])).toMatch(/HttpOnly/);
  });

  it('says the same words for a wrong password and an unknown address', async () => {
    const one = await app.browser();
    const wrong = await one.signIn(estate.ownerEmail, 'not this one');
    const unknown = await one.signIn('nobody@test.example', 'not this one');
    expect(wrong.status).toBe(401);
    expect(unknown.body).toEqual(wrong.body);
  });

  it('refuses in the language of the page, input field by field', async () => {
    const one = await app.as(estate.ownerEmail);
    const wrong = await one.write('post', '/api/session').set('accept-language', 'fr').send({ email: estate.ownerEmail, password: 'not this one' });
    expect(wrong.headers['content-language']).toBe('fr');
    expect(wrong.body).toMatchObject({ code: 'notSignedIn', detail: fr.wrongSignIn });
    const field = await one.write('patch', `/api/estates/${estate.estateId}`).set('accept-language', 'pt').send({ timeZone: 'Nowhere/Town' });
    expect(field.body.errors).toEqual([{ path: 'timeZone', message: 'Isto não é um fuso horário; escolha um da lista, como Europe/Lisbon.' }]);
    const other = await one.get('/api/estates/none/people').set('accept-language', 'de');
    expect(other.headers['content-language']).toBe('en');
  });

  it('refuses a write without the token of the session', async () => {
    const one = await app.as(estate.ownerEmail);
    const answer = await one.write('patch', `/api/estates/${estate.estateId}`).set('x-csrf-token', 'made up').send({ name: 'Taken over' });
    expect(answer.status).toBe(403);
    expect((await one.get(`/api/estates/${estate.estateId}`)).body.name).toBe('Marl test');
  });

  it('signs out', async () => {
    const one = await app.as(estate.ownerEmail);
    expect((await one.delete('/api/session')).status).toBe(204);
    expect((await one.get(`/api/estates/${estate.estateId}/people`)).status).toBe(401);
  });

  it('ends access on the last day and keeps the person in the books', async () => {
    const crew = await app.addPerson(estate.estateId, 'crew');
    await Membership.query().where({ personId: crew.id }).patch({ startsOn: '2020-01-01', endsOn: '2020-02-01' });
    const one = await app.as(crew.email);
    expect((await one.get(`/api/estates/${estate.estateId}`)).status).toBe(404);
    const owner = await app.as(estate.ownerEmail);
    const people = (await owner.get(`/api/estates/${estate.estateId}/people`)).body.items as { id: string }[];
    expect(people.map((person) => person.id)).toContain(crew.id);
  });

  it('changes a password only for somebody who knows the old one', async () => {
    const person = await app.addPerson(estate.estateId, 'lab');
    const one = await app.as(person.email);
    expect((await one.put('/api/account/password', { password: 'another long one', currentPassword: 'wrong' })).status).toBe(422);
    expect((await one.put('/api/account/password', { password: 'another long one', currentPassword: testPassword })).status).toBe(200);
    expect((await (await app.browser()).signIn(person.email, 'another long one')).status).toBe(200);
  });
});
