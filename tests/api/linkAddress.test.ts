import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { linkAddress } from '../../server/access/linkAddress.ts';
import { readConfig } from '../../server/config.ts';
import { setLogLevel } from '../../server/log.ts';
import { Invitation } from '../../server/models/Invitation.ts';
import { MailMessage } from '../../server/models/MailMessage.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

/** Whose word decides where links in mails lead. */
describe.each([['', null], ['https://vines.example/', 'https://vines.example']])('with PUBLIC_URL "%s"', (publicUrl, address) => {
  let app: TestApp;
  let estate: Awaited<ReturnType<TestApp['addEstate']>>;
  beforeAll(async () => {
    app = await startTestApp({ PUBLIC_URL: publicUrl });
    setLogLevel('silent');
    estate = await app.addEstate('Quiet Bank');
  });
  afterAll(() => app.close());
  beforeEach(async () => {
    await app.knex.raw('truncate invitations, mail_messages cascade');
  });

  const invite = async (host: string) => {
    const owner = await app.as(estate.ownerEmail);
    const answer = await owner.write('post', `/api/estates/${estate.estateId}/invitations`).set('host', host).send({ email: 'mara@new.example', roles: ['agronomist'] });
    const mail = await MailMessage.query().findOne({ kind: 'invitation' });
    return { status: answer.status, code: answer.body.code as string, detail: answer.body.detail as string, base: /^(\S+)\/join\//m.exec(mail?.bodyText ?? '')?.[1] };
  };

  it.each(['localhost:3000', '127.0.0.1', '[::1]:3000', '192.168.1.20:3000', '10.0.0.7', '172.20.1.1', '[fd00::7]', 'cellar', 'cellar.local'])('an invitation sent by %s carries a link that opens', async (host) => {
    expect(await invite(host)).toMatchObject({ status: 201, base: address ?? `http://${host}` });
  });

  it.each(['evil.example', 'localhost.evil.example', '172.32.0.1', '8.8.8.8', '[2001:db8::1]', 'user@evil.example', '127.0.0.1.evil.example'])('one sent by %s leads where PUBLIC_URL says, or nowhere', async (host) => {
    const sent = await invite(host);
    if (address !== null) return void expect(sent).toMatchObject({ status: 201, base: address });
    expect(sent).toMatchObject({ status: 409, code: 'noPublicUrl', base: undefined });
    expect(sent.detail).toContain('PUBLIC_URL=https://');
    expect(await Invitation.query().resultSize()).toBe(0);
  });

  it.each(['192.168.1.20', 'cellar', 'evil.example'])('a link for a new password is not taken from the name %s', async (host) => {
    const answer = await (await app.browser()).post('/api/password-resets', { email: estate.ownerEmail }).set('host', host);
    expect(answer.status).toBe(202);
    const mail = await MailMessage.query().findOne({ kind: 'reset' });
    expect(/^(\S+)\/reset\//m.exec(mail?.bodyText ?? '')?.[1] ?? null).toBe(address);
  });
});

it('takes no address as PUBLIC_URL that people could not open', () => {
  const config = (PUBLIC_URL: string) => readConfig({ NODE_ENV: 'test', DATABASE_URL: 'postgres://nobody@127.0.0.1/none', PUBLIC_URL });
  expect(() => config('vines.example')).toThrow(/PUBLIC_URL: .*https:\/\/vines\.example/);
  expect(() => config('javascript:alert(1)')).toThrow(/PUBLIC_URL/);
  expect(config('http://192.168.1.20:3000/').publicUrl).toBe('http://192.168.1.20:3000');
});

it('prints on paper what whoever asks calls the server', () => {
  const links = linkAddress(readConfig({ NODE_ENV: 'test', DATABASE_URL: 'postgres://nobody@127.0.0.1/none' }));
  expect(links.forPaper({ protocol: 'https', get: () => 'vines.example' } as never)).toBe('https://vines.example');
});
