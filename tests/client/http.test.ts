import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { fileNameFrom, http, setCsrfToken, whenContacted, whenSignedOut } from '../../src/lib/http.ts';
import { HttpProblem } from '../../src/lib/httpProblem.ts';

type Answer = (request: IncomingMessage, response: ServerResponse) => void;
let answer: Answer = (_request, response) => response.end();
const asked: { method: string; url: string; headers: IncomingMessage['headers'] }[] = [];
let server: Server;

function reply(response: ServerResponse, status: number, body: unknown, headers: Record<string, string> = {}): void {
  response.writeHead(status, { 'content-type': status >= 400 ? 'application/problem+json' : 'application/json', ...headers });
  response.end(JSON.stringify(body));
}

beforeAll(async () => {
  server = createServer((request, response) => {
    asked.push({ method: request.method!, url: request.url!, headers: request.headers });
    answer(request, response);
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  (window as unknown as { happyDOM: { setURL(url: string): void } }).happyDOM.setURL(`http://127.0.0.1:${(server.address() as AddressInfo).port}/`);
});
afterAll(() => new Promise((resolve) => server.close(resolve)));
beforeEach(() => {
  asked.length = 0;
  setCsrfToken('first');
  whenSignedOut(() => undefined);
  whenContacted(() => undefined);
});

async function problemOf(promise: Promise<unknown>): Promise<HttpProblem> {
  const error: unknown = await promise.then(() => null, (reason: unknown) => reason);
  expect(error).toBeInstanceOf(HttpProblem);
  return error as HttpProblem;
}

describe('http', () => {
  it('reads carry the query without empty values; writes carry the token', async () => {
    answer = (_request, response) => reply(response, 200, { ok: true });
    expect(await http.get('/api/estates/1/audit', { query: { before: 5, kind: null, person: undefined, zero: 0 } })).toEqual({ ok: true });
    await http.post('/api/estates', { name: 'Marlhaven' });
    expect(asked[0]!.url).toBe('/api/estates/1/audit?before=5&zero=0');
    expect(asked[0]!.headers['x-csrf-token']).toBeUndefined();
    expect(asked[1]!.headers['x-csrf-token']).toBe('first');
  });

  it('a problem of the server keeps its code, sentence, fields and further facts', async () => {
    answer = (_request, response) => reply(response, 422, { type: 'about:blank', title: 'Cannot be used', status: 422, detail: 'name: Give a name.', code: 'badInput', errors: [{ path: 'name', message: 'Give a name.' }], current: { version: 4 } });
    const problem = await problemOf(http.post('/api/estates', {}));
    expect(problem).toMatchObject({ status: 422, code: 'badInput', message: 'name: Give a name.', isOffline: false, facts: { current: { version: 4 } } });
    expect(problem.messageFor('name')).toBe('Give a name.');
    expect(problem.messageFor('area')).toBeNull();
  });

  it('an answer that is no problem+json still becomes a problem with its status', async () => {
    answer = (_request, response) => void response.writeHead(500).end('<html>');
    expect(await problemOf(http.get('/api/health'))).toMatchObject({ status: 500, code: 'unknown' });
  });

  it('a line that never answers is given up in its time and counts as no signal', async () => {
    const contacts: boolean[] = [];
    whenContacted((reached) => contacts.push(reached));
    let held: ServerResponse | null = null;
    answer = (_request, response) => void (held = response);
    const from = Date.now();
    const problem = await problemOf(http.post('/api/estates/1/readings', {}, { withinMs: 150 }));
    expect(Date.now() - from).toBeLessThan(3000);
    expect(problem.isOffline).toBe(true);
    expect(contacts).toEqual([false]);
    held!.end();
  });

  it('an answer that breaks off in the middle, or a sign-in page of somebody else’s network, is no contact', async () => {
    const contacts: boolean[] = [];
    whenContacted((reached) => contacts.push(reached));
    answer = (_request, response) => {
      response.writeHead(200, { 'content-type': 'application/json', 'content-length': '400' });
      response.write('{"outcomes": [');
      setTimeout(() => response.destroy(), 30);
    };
    expect((await problemOf(http.get('/api/estates/1/readings'))).isOffline).toBe(true);
    answer = (_request, response) => void response.writeHead(200, { 'content-type': 'text/html' }).end('<html>Accept the terms</html>');
    expect((await problemOf(http.post('/api/estates/1/readings', {}))).isOffline).toBe(true);
    expect(contacts.at(-1)).toBe(false);
  });

  it('every answer tells the server’s clock', async () => {
    const clocks: (Date | null)[] = [];
    whenContacted((_reached, serverTime) => clocks.push(serverTime));
    answer = (_request, response) => reply(response, 200, {}, { date: 'Thu, 09 Jul 2026 07:00:00 GMT' });
    await http.get('/api/session');
    expect(clocks).toEqual([new Date('2026-07-09T07:00:00Z')]);
  });

  it('a change says which version it was made on', async () => {
    answer = (_request, response) => reply(response, 200, {}, { etag: '"7"' });
    expect((await http.getTagged('/api/estates/1/blocks/2')).etag).toBe('"7"');
    await http.patch('/api/estates/1/blocks/2', {}, { ifMatch: 7 });
    expect(asked[1]!.headers['if-match']).toBe('"7"');
  });

  it('a refused write is sent once more when the session has a newer token', async () => {
    answer = (request, response) => {
      if (request.url === '/api/session') return reply(response, 200, { csrfToken: 'second' });
      if (request.headers['x-csrf-token'] === 'second') return reply(response, 200, { done: true });
      reply(response, 403, { code: 'notAllowed', title: 'Not allowed', detail: '', status: 403 });
    };
    expect(await http.post('/api/estates', {})).toEqual({ done: true });
    expect(asked.map(({ url }) => url)).toEqual(['/api/estates', '/api/session', '/api/estates']);
  });

  it('a write that is not allowed stays refused', async () => {
    answer = (request, response) => (request.url === '/api/session' ? reply(response, 200, { csrfToken: 'first' }) : reply(response, 403, { code: 'notAllowed', title: 'Not allowed', detail: '', status: 403 }));
    expect((await problemOf(http.post('/api/estates', {}))).status).toBe(403);
    expect(asked).toHaveLength(2);
  });

  it('a session that ended is told once, with what it did not take; a failed sign-in is not', async () => {
    const told: boolean[] = [];
    whenSignedOut((untaken) => told.push(untaken));
    answer = (_request, response) => reply(response, 401, { code: 'notSignedIn', title: 'Not signed in', detail: '', status: 401 });
    await problemOf(http.get('/api/estates/1/blocks'));
    await problemOf(http.post('/api/session', { email: 'a', password: 'b' }));
    expect(told).toEqual([false]);
    await problemOf(http.post('/api/estates/1/blocks', {}));
    await problemOf(http.post('/api/estates/1/zonings/2/presence', undefined, { unasked: true }));
    expect(told).toEqual([false, true, false]);
  });

  it('no server at all is offline, and so is a gateway without one', async () => {
    const contacts: boolean[] = [];
    whenContacted((reached) => contacts.push(reached));
    answer = (_request, response) => void response.destroy();
    expect((await problemOf(http.get('/api/health'))).isOffline).toBe(true);
    answer = (_request, response) => void response.writeHead(502).end();
    expect((await problemOf(http.get('/api/health'))).isOffline).toBe(true);
    answer = (_request, response) => reply(response, 200, {});
    await http.get('/api/health');
    expect(contacts).toContain(false);
    expect(contacts.at(-1)).toBe(true);
  });

  it('a change without an answer may have arrived, unless the device knows that it has no line; a look and a sign-in change nothing', async () => {
    answer = (_request, response) => void response.destroy();
    const arrived = async (asked: Promise<unknown>) => (await problemOf(asked)).mayHaveArrived;
    expect(await arrived(http.post('/api/estates/1/blocks', {}))).toBe(true);
    expect(await arrived(http.get('/api/estates/1/blocks'))).toBe(false);
    expect(await arrived(http.post('/api/session', {}))).toBe(false);
    answer = (_request, response) => void response.writeHead(200).end('<p>Welcome to the hotel</p>');
    expect(await arrived(http.patch('/api/estates/1/blocks/2', {}))).toBe(true);
    answer = (_request, response) => void response.destroy();
    vi.stubGlobal('navigator', { onLine: false });
    expect(await arrived(http.post('/api/estates/1/blocks', {}))).toBe(false);
    vi.unstubAllGlobals();
  });

  it('nothing comes back from an empty answer', async () => {
    answer = (_request, response) => void response.writeHead(204).end();
    expect(await http.delete('/api/session')).toBeUndefined();
  });
});

// RFC 6266, section 5 gives these two headers as examples.
describe('file names', () => {
  it.each([
    ['Attachment; filename=example.html', 'example.html'],
    ["attachment; filename=\"EURO rates\"; filename*=utf-8''%e2%82%ac%20rates", '€ rates'],
    [null, null],
  ])('%s names %s', (header, name) => {
    expect(fileNameFrom(header)).toBe(name);
  });
});
