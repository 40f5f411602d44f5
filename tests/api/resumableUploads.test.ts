import { randomBytes } from 'node:crypto';
import { once } from 'node:events';
import { mkdtempSync, readdirSync, rmSync, utimesSync } from 'node:fs';
import { createServer, request, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openFileStore } from '../../server/storage/fileStore.ts';
import { dropForgotten } from '../../server/storage/resumable.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { startTestApp, testPassword, type TestApp } from './support/testApp.ts';

let app: TestApp;
let server: Server;
let origin: string;
let estateId: string;
let line: Line;
const folder = mkdtempSync(join(tmpdir(), 'pieces-'));
const base = () => `/api/estates/${estateId}/imports`;

/** A browser on a real line. */
interface Line {
  headers: Record<string, string>;
  ask: (method: string, path: string, headers?: Record<string, string>, body?: Uint8Array | string) => Promise<Response>;
}

async function signIn(email: string): Promise<Line> {
  let cookie = '';
  const ask: Line['ask'] = (method, path, headers = {}, body) => fetch(`${origin}${path}`, { method, headers: { cookie, 'tus-resumable': '1.0.0', 'x-csrf-token': token, ...headers }, ...(body === undefined ? {} : { body: body as BodyInit }) });
  let token = '';
  const remember = async (answer: Response) => {
    cookie = answer.headers.getSetCookie().map((each) => each.split(';')[0]!).join('; ') || cookie;
    token = ((await answer.json()) as { csrfToken: string }).csrfToken;
  };
  await remember(await ask('GET', '/api/session'));
  await remember(await ask('POST', '/api/session', { 'content-type': 'application/json' }, JSON.stringify({ email, password: testPassword })));
  return { ask, headers: { cookie, 'x-csrf-token': token } };
}

beforeAll(async () => {
  await openFileStore(folder);
  openComputePool(1);
  app = await startTestApp({ UPLOAD_LIMIT_MB: '4' });
  server = createServer(app.application).listen(0, '127.0.0.1');
  await once(server, 'listening');
  origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  ({ estateId } = await app.addEstate());
  line = await signIn((await app.addPerson(estateId, 'agronomist')).email);
});
afterAll(async () => {
  server.closeAllConnections();
  server.close();
  await closeComputePool();
  await app.close();
  rmSync(folder, { recursive: true, force: true });
});

const begin = (bytes: number, fileName: string, by = line) => by.ask('POST', `${base()}/pieces`, { 'upload-length': String(bytes), 'upload-metadata': `filename ${Buffer.from(fileName).toString('base64')}` });
const send = (address: string, piece: Buffer, offset: number, by = line) => by.ask('PATCH', address, { 'upload-offset': String(offset), 'content-type': 'application/offset+octet-stream' }, piece);
const takeIn = async (address: string, by = line) => {
  const answer = await by.ask('POST', `${base()}/arrived`, { 'content-type': 'application/json' }, JSON.stringify({ uploads: [idOf(address)] }));
  return { status: answer.status, body: (await answer.json()) as { items: { fileId: string }[]; code: string } };
};
const addressOf = (started: Response) => new URL(started.headers.get('location')!, origin).pathname;
const idOf = (address: string) => address.split('/').pop()!;

/** A table of points, some hundred kilobytes. */
function table(): Buffer {
  const lines = Array.from({ length: 12_000 }, (_, at) => `${(3.001 + at * 1e-7).toFixed(7)},${(44.703 + (at % 100) * 1e-6).toFixed(7)},${20 + (at % 7)}`);
  return Buffer.from(['lon,lat,ec', ...lines].join('\n'));
}

describe('a large file in pieces', () => {
  it('survives a line that drops again and again, and comes in byte for byte', async () => {
    const bytes = table();
    const started = await begin(bytes.length, 'Leitfähigkeit "west".csv');
    expect(started.status).toBe(201);
    const address = addressOf(started);
    expect(address).toMatch(new RegExp(`^${base()}/pieces/${estateId}\\.`));
    for (let sent = 0, turn = 0; sent < bytes.length; turn += 1) {
      // The line drops in the middle of every second piece; what had arrived is asked for and gone on from.
      const piece = bytes.subarray(sent, Math.min(bytes.length, sent + 60_000));
      if (turn % 2 === 0) await cutOff(address, piece, sent);
      else expect((await send(address, piece, sent)).status).toBe(204);
      const asked = await line.ask('HEAD', address);
      sent = Number(asked.headers.get('upload-offset'));
    }
    const arrived = await takeIn(address);
    expect(arrived.status).toBe(201);
    const [taken] = arrived.body.items;
    expect(taken).toMatchObject({ fileName: 'Leitfähigkeit "west".csv', bytes: bytes.length, state: 'asks', understood: { kind: 'points', count: 12_000 } });
    const original = await line.ask('GET', `/api/estates/${estateId}/files/${taken!.fileId}/download`);
    expect(bytes.equals(Buffer.from(await original.arrayBuffer()))).toBe(true);
    expect(readdirSync(join(folder, 'incoming'))).toEqual([]);
    expect((await takeIn(address)).status).toBe(404);
  });

  it('cannot be taken in before it is whole, nor sent out of order', async () => {
    const started = await begin(1000, 'ec.csv');
    const address = addressOf(started);
    expect((await send(address, randomBytes(400), 0)).status).toBe(204);
    expect((await send(address, randomBytes(400), 100)).status).toBe(409);
    const early = await takeIn(address);
    expect(early.body).toMatchObject({ status: 422, code: 'uploadUnfinished', detail: expect.stringMatching(/ec\.csv only 400 of 1000 bytes/) as string });
  });

  it('of a PNG under the name of a picture is refused like any other file', async () => {
    const png = Buffer.concat([Buffer.from([0x89, 0x50, 0x4e, 0x47, 13, 10, 26, 10]), randomBytes(500)]);
    const started = await begin(png.length, 'vigour.tif');
    const address = addressOf(started);
    await send(address, png, 0);
    const refused = await takeIn(address);
    expect(refused.status).toBe(422);
    expect(refused.body.items[0]).toMatchObject({ state: 'refused', problem: { code: 'wrong-type' } });
  });

  it('is refused over the limit before a byte is sent, in the words of this server', async () => {
    const refused = await begin(5 * 2 ** 20, 'big.tif');
    expect(refused.status).toBe(413);
    expect(await refused.json()).toMatchObject({ code: 'fileTooLarge', detail: expect.stringMatching(/4 MB/) as string });
  });

  it('is nobody else’s: not another person’s, not another estate’s, not without the write token', async () => {
    const started = await begin(1000, 'ec.csv');
    const address = addressOf(started);
    const colleague = await signIn((await app.addPerson(estateId, 'agronomist')).email);
    expect((await colleague.ask('HEAD', address)).status).toBe(404);
    expect((await send(address, randomBytes(400), 0, colleague)).status).toBe(404);
    expect((await takeIn(address, colleague)).status).toBe(404);
    const other = await app.addEstate();
    expect((await send(address.replace(estateId, other.estateId), randomBytes(400), 0)).status).toBe(404);
    expect((await line.ask('HEAD', address)).status).toBe(200);
    const manager = await signIn((await app.addPerson(estateId, 'manager')).email);
    expect((await begin(1000, 'ec.csv', manager)).status).toBe(403);
    expect((await fetch(`${origin}${address}`, { method: 'HEAD', headers: { 'tus-resumable': '1.0.0' } })).status).toBe(401);
    expect((await line.ask('PATCH', address, { 'x-csrf-token': 'wrong', 'upload-offset': '0', 'content-type': 'application/offset+octet-stream' }, randomBytes(10))).status).toBe(403);
  });

  it('is forgotten a day after its last piece', async () => {
    const started = await begin(1000, 'ec.csv');
    const id = idOf(addressOf(started));
    const now = new Date();
    await dropForgotten(now);
    expect(readdirSync(join(folder, 'incoming'))).toContain(id);
    const dayAgo = new Date(now.getTime() - 25 * 3_600_000);
    for (const name of readdirSync(join(folder, 'incoming'))) utimesSync(join(folder, 'incoming', name), dayAgo, dayAgo);
    await dropForgotten(now);
    expect(readdirSync(join(folder, 'incoming'))).toEqual([]);
  });
});

/** Sends half of a piece and then lets go of the line. The browser's own cookies and token go along. */
async function cutOff(address: string, piece: Buffer, offset: number): Promise<void> {
  const cut = request(`${origin}${address}`, { method: 'PATCH', headers: { ...line.headers, 'tus-resumable': '1.0.0', 'upload-offset': offset, 'content-type': 'application/offset+octet-stream', 'content-length': piece.length } });
  cut.on('error', () => undefined);
  cut.write(piece.subarray(0, Math.floor(piece.length / 2)));
  await new Promise((done) => setTimeout(done, 60));
  cut.destroy();
  await new Promise((done) => setTimeout(done, 40));
}
