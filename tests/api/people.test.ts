import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Invitation } from '../../server/models/Invitation.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let owner: Agent;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Quiet Bank');
  owner = await app.as(estate.ownerEmail);
});
afterAll(() => app.close());

const base = () => `/api/estates/${estate.estateId}`;

async function inviteLink(email: string, role = 'agronomist'): Promise<string> {
  expect((await owner.post(`${base()}/invitations`, { email, name: 'Mara Quill', roles: [role] })).status).toBe(201);
  const { items } = (await owner.get(`${base()}/mail`)).body as { items: { to: string; text: string }[] };
  const mail = items.find((item) => item.to === email)!;
  return /\/join\/(\S+)/.exec(mail.text)![1]!;
}

describe('another estate', () => {
  it('is made by whoever owns one, and by nobody else', async () => {
    for (const role of ['crew', 'lab', 'manager', 'agronomist', 'winemaker', 'admin'] as const) {
      const { status, body } = await (await app.as((await app.addPerson(estate.estateId, role)).email)).post('/api/estates', { name: 'Mine' });
      expect([role, status, body.code]).toEqual([role, 403, 'notAllowed']);
    }
    const another = await app.as((await app.addEstate('Near Bank')).ownerEmail);
    const made = await another.post('/api/estates', { name: 'Far Bank' });
    expect(made.status).toBe(201);
    expect((await another.get(`/api/estates/${made.body.id}/people`)).status).toBe(200);
  });
});

describe('inviting', () => {
  it('writes a mail that the owner can read, and its link opens the estate once', async () => {
    const token = await inviteLink('mara@new.example');
    const guest = await app.browser();
    expect((await guest.get(`/api/invitations/${token}`)).body).toMatchObject({ estate: 'Quiet Bank', roles: ['agronomist'], knownPerson: false });
    const joined = await guest.post('/api/invitations/accept', { token, name: 'Mara Quill', password: 'vines and rows' });
    expect(joined.status).toBe(201);
    expect(joined.body.estates[0]).toMatchObject({ name: 'Quiet Bank', roles: ['agronomist'] });
    const again = await (await app.browser()).post('/api/invitations/accept', { token, name: 'Other', password: 'another password' });
    expect(again.status).toBe(409);
    expect(again.body.detail).toMatch(/used already/);
  });

  it('refuses an expired and a revoked invitation with the reason', async () => {
    const expired = await inviteLink('late@new.example');
    await Invitation.query().where({ email: 'late@new.example' }).patch({ expiresAt: new Date('2020-01-01') });
    expect((await (await app.browser()).get(`/api/invitations/${expired}`)).body.detail).toMatch(/expired/);
    const revoked = await inviteLink('gone@new.example');
    const open = await Invitation.query().findOne({ email: 'gone@new.example' });
    expect((await owner.delete(`${base()}/invitations/${open!.id}`)).status).toBe(204);
    expect((await (await app.browser()).get(`/api/invitations/${revoked}`)).body.detail).toMatch(/taken back/);
  });

  it('never stores the secret of a link', async () => {
    const token = await inviteLink('hash@new.example');
    const stored = await Invitation.query().findOne({ email: 'hash@new.example' });
    expect(JSON.stringify(stored)).not.toContain(token);
  });

  it('lets a manager invite crew and nobody else', async () => {
    const manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
    expect((await manager.post(`${base()}/invitations`, { email: 'rui@new.example', roles: ['crew'] })).status).toBe(201);
    expect((await manager.post(`${base()}/invitations`, { email: 'boss@new.example', roles: ['admin'] })).status).toBe(403);
  });

  it('names the field of a bad address', async () => {
    const answer = await owner.post(`${base()}/invitations`, { email: 'not an address', roles: ['crew'] });
    expect(answer.status).toBe(422);
    expect(answer.body.errors[0].path).toBe('email');
  });
});

describe('roles', () => {
  it('changes a role, ends access, and writes both down', async () => {
    const person = await app.addPerson(estate.estateId, 'crew', 'Nadia Holt');
    expect((await owner.put(`${base()}/people/${person.id}/roles`, { roles: ['manager', 'winemaker'] })).status).toBe(204);
    const session = await (await app.as(person.email)).get('/api/session');
    expect([...session.body.estates[0].roles].sort()).toEqual(['manager', 'winemaker']);
    expect((await owner.put(`${base()}/people/${person.id}/roles`, { roles: [], reason: 'season over' })).status).toBe(204);
    expect((await (await app.as(person.email)).get(base())).status).toBe(404);
    const written = await AuditEntry.query().where({ subjectId: person.id }).orderBy('id');
    expect(written.map((entry) => entry.action)).toEqual(['people.changeRoles', 'people.endAccess']);
    expect(written[1]!.reason).toBe('season over');
  });

  it('keeps at least one owner, and only an owner makes one', async () => {
    expect((await owner.put(`${base()}/people/${estate.ownerId}/roles`, { roles: ['manager'] })).body.code).toBe('lastOwner');
    const admin = await app.as((await app.addPerson(estate.estateId, 'admin')).email);
    const other = await app.addPerson(estate.estateId, 'lab');
    expect((await admin.put(`${base()}/people/${other.id}/roles`, { roles: ['owner'] })).status).toBe(403);
  });

  it('keeps audit entries from being changed or deleted', async () => {
    await expect(app.knex.raw("update audit_entries set action = 'x'")).rejects.toThrow(/append-only/);
    await expect(app.knex.raw('delete from audit_entries')).rejects.toThrow(/append-only/);
  });
});

describe('walls between estates', () => {
  it('answers 404 for everything of another estate', async () => {
    const other = await app.addEstate('Far Side');
    const stranger = await app.as(other.ownerEmail);
    for (const path of ['', '/people', '/invitations', '/audit', '/mail']) expect((await stranger.get(`${base()}${path}`)).status).toBe(404);
    const inside = await app.addPerson(estate.estateId, 'crew');
    expect((await stranger.put(`/api/estates/${other.estateId}/people/${inside.id}/roles`, { roles: ['guest'] })).status).toBe(404);
  });
});

describe('the season', () => {
  it('starts with usual days, and takes others that fit', async () => {
    const seasonOf = async () => (await owner.get('/api/session')).body.estates[0].season as { id: string; startsOn: string; phases: Record<string, [string, string]> };
    const { id, startsOn, phases } = await seasonOf();
    expect(Object.keys(phases).sort()).toEqual(['bloom', 'dormant', 'lagPhase', 'pick', 'review', 'veraison']);
    const moved = { ...phases, pick: [phases.pick![0], phases.pick![0]] as [string, string] };
    expect((await owner.patch(`${base()}/seasons/${id}`, { phases: moved })).status).toBe(204);
    expect((await seasonOf()).phases).toEqual(moved);
    const refused = await owner.patch(`${base()}/seasons/${id}`, { phases: { ...moved, bloom: [startsOn, '2020-01-01'] } });
    expect([refused.status, refused.body.code]).toEqual([422, 'phases']);
    expect((await seasonOf()).phases).toEqual(moved);
  });
});
