import { once } from 'node:events';
import type { AddressInfo } from 'node:net';
import { SMTPServer } from 'smtp-server';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { makeTransport, type MailTransport } from '../../server/mail/transport.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

interface Received {
  from: string;
  to: string[];
  text: string;
}

const received: Received[] = [];
const busy = new Set(['eva@busy.example']);
/** Takes what it is sent after a while, as a mail server far away does; knows nobody at nowhere.example, and asks some to come again. */
const mailServer = new SMTPServer({
  authOptional: true,
  disabledCommands: ['STARTTLS'],
  logger: false,
  onRcptTo: ({ address }, _session, done) => {
    if (busy.has(address)) done(Object.assign(new Error('Greylisted, come again'), { responseCode: 451 }));
    else if (address.endsWith('@nowhere.example')) done(new Error('No such mailbox here'));
    else done();
  },
  onData(stream, { envelope }, done) {
    const parts: Buffer[] = [];
    stream.on('data', (part: Buffer) => parts.push(part));
    stream.on('end', () => {
      received.push({ from: envelope.mailFrom === false ? '' : envelope.mailFrom.address, to: envelope.rcptTo.map(({ address }) => address), text: Buffer.concat(parts).toString('utf8') });
      setTimeout(done, 150);
    });
  },
});

let app: TestApp;
let owner: Agent;
let base = '';
let mail: MailTransport;

beforeAll(async () => {
  app = await startTestApp();
  const estate = await app.addEstate('Quiet Bank');
  owner = await app.as(estate.ownerEmail);
  base = `/api/estates/${estate.estateId}`;
  const listening = once(mailServer.listen(0, '127.0.0.1'), 'listening');
  await listening;
  mail = makeTransport({ smtpUrl: `smtp://127.0.0.1:${(mailServer.server.address() as AddressInfo).port}`, from: 'Patchrow <vines@quietbank.example>' });
});
afterAll(async () => {
  mail.close();
  await new Promise<void>((closed) => void mailServer.close(closed));
  await app.close();
});

const invite = async (email: string) => expect((await owner.post(`${base}/invitations`, { email, name: 'Zoë Quill', roles: ['agronomist'] })).status).toBe(201);
const outbox = async () => ((await owner.get(`${base}/mail`)).body as { items: { to: string; state: string; error: string | null; sentAt: string | null; text: string }[] }).items;

describe('mail', () => {
  it('stays in the outbox where no mail server is named', async () => {
    await invite('zoe@new.example');
    const silent = makeTransport({ smtpUrl: '', from: 'Patchrow <vines@quietbank.example>' });
    expect(await silent.flush(new Date())).toBe(0);
    expect(await outbox()).toMatchObject([{ to: 'zoe@new.example', state: 'outbox', sentAt: null }]);
    expect(received).toEqual([]);
  });

  it('is sent once, however often sending is asked for while a slow server takes it', async () => {
    const first = mail.flush(new Date());
    await expect.poll(() => received.length).toBe(1);
    expect(await Promise.all([first, mail.flush(new Date())])).toEqual([1, 1]);
    expect(await mail.flush(new Date())).toBe(0);
    expect(received).toMatchObject([{ from: 'vines@quietbank.example', to: ['zoe@new.example'] }]);
    const [written] = await outbox();
    expect(written).toMatchObject({ state: 'sent', error: null });
    // Quoted-printable breaks long lines with a "=" at the end and writes "=" as "=3D".
    const plain = received[0]!.text.replace(/=\r\n/g, '').replace(/=3D/g, '=');
    expect(plain).toContain(/https?:\/\/\S+\/join\/\S+/.exec(written!.text)![0]);
  });

  it('that is refused is marked with what the server said, and holds up no other', async () => {
    await invite('lost@nowhere.example');
    await invite('rui@new.example');
    expect(await mail.flush(new Date())).toBe(1);
    const all = await outbox();
    expect(all.find(({ to }) => to === 'rui@new.example')).toMatchObject({ state: 'sent' });
    expect(all.find(({ to }) => to === 'lost@nowhere.example')).toMatchObject({ state: 'failed', error: expect.stringContaining('No such mailbox here') as string });
  });

  const inSeconds = (seconds: number) => new Date(Date.now() + seconds * 1000);

  it('that a busy server puts off is tried again after a minute', async () => {
    await invite('eva@busy.example');
    expect(await mail.flush(new Date())).toBe(0);
    const put = (await outbox()).find(({ to }) => to === 'eva@busy.example');
    expect(put).toMatchObject({ state: 'outbox', error: expect.stringContaining('Greylisted') as string });
    busy.clear();
    expect(await mail.flush(inSeconds(30))).toBe(0);
    expect(await mail.flush(inSeconds(61))).toBe(1);
    expect((await outbox()).find(({ to }) => to === 'eva@busy.example')).toMatchObject({ state: 'sent', error: null });
  });

  it('waits for a server that is down, for a day; then it has failed', async () => {
    await invite('ines@new.example');
    const closed = makeTransport({ smtpUrl: 'smtp://127.0.0.1:9', from: 'Patchrow <vines@quietbank.example>' });
    const last = async () => (await outbox()).find(({ to }) => to === 'ines@new.example');
    expect(await closed.flush(new Date())).toBe(0);
    expect(await last()).toMatchObject({ state: 'outbox', error: expect.stringContaining('ECONNREFUSED') as string });
    expect(await closed.flush(inSeconds(25 * 3600))).toBe(0);
    expect(await last()).toMatchObject({ state: 'failed' });
  });
});
