import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import { createPinia, setActivePinia } from 'pinia';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { setCsrfToken } from '../../src/lib/http.ts';
import { inOrder } from '../../src/lib/inOrder.ts';
import { useImportsStore } from '../../src/stores/imports.ts';

/** The server's lines, and answers to listings that are held back until the test lets them go. */
let stored: { id: string; fileName: string; state: string }[] = [];
let held: (() => void)[] = [];
let isHolding = false;
let server: Server;

function reply(response: ServerResponse, status: number, body: unknown): void {
  response.writeHead(status, { 'content-type': status >= 400 ? 'application/problem+json' : 'application/json' });
  response.end(JSON.stringify(body));
}

function serve(request: IncomingMessage, response: ServerResponse): void {
  if (request.method === 'GET') {
    const one = stored.find(({ id }) => request.url!.endsWith(`/${id}`));
    const body = one ? { ...one } : { items: request.url!.includes('/estates/2/') ? [{ id: 'other', fileName: 'other.zip', state: 'ready' }] : [...stored] };
    if (isHolding) held.push(() => reply(response, 200, body));
    else reply(response, 200, body);
    return;
  }
  request.resume().on('end', () => {
    if (request.method === 'DELETE') {
      stored = stored.filter(({ id }) => !request.url!.endsWith(id));
      response.writeHead(204).end();
      return;
    }
    if (request.method === 'PATCH') {
      const line = stored.find(({ id }) => request.url!.endsWith(`/${id}`))!;
      if (line.state === 'done') return reply(response, 409, { status: 409, code: 'importDone', detail: 'It has been taken over already.' });
      line.state = 'ready';
      return reply(response, 200, { ...line });
    }
    const line = { id: 'holiday', fileName: 'holiday.tif', state: 'refused' };
    stored = [line, ...stored];
    reply(response, 422, { status: 422, code: 'not-a-picture', detail: 'It is a web page.', items: [line] });
  });
}

beforeAll(async () => {
  server = createServer(serve);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  (window as unknown as { happyDOM: { setURL(url: string): void } }).happyDOM.setURL(`http://127.0.0.1:${(server.address() as AddressInfo).port}/`);
});
afterAll(() => new Promise((resolve) => server.close(resolve)));
beforeEach(() => {
  setActivePinia(createPinia());
  setCsrfToken('known');
  [stored, held, isHolding] = [[{ id: 'soil', fileName: 'soil.zip', state: 'ready' }], [], true];
});

/** Begins to load the list, waits until the server has read it, and returns how to let all listings go. */
async function loadingSlowly(imports: ReturnType<typeof useImportsStore>) {
  const loading = imports.load('1');
  await expect.poll(() => held.length).toBe(1);
  return async () => {
    isHolding = false;
    held.forEach((answer) => answer());
    await loading;
  };
}
const names = (imports: ReturnType<typeof useImportsStore>) => imports.lines.map(({ fileName }) => fileName);

describe('a list of imports that comes late', () => {
  it('does not take a file off the screen that was refused meanwhile', async () => {
    const imports = useImportsStore();
    const letGo = await loadingSlowly(imports);
    await imports.send('1', [new File(['<html>'], 'holiday.tif')]);
    expect(names(imports)).toEqual(['holiday.tif']);
    await letGo();
    expect(names(imports)).toEqual(['holiday.tif', 'soil.zip']);
  });

  it('does not bring back a line that was dismissed meanwhile', async () => {
    const imports = useImportsStore();
    const letGo = await loadingSlowly(imports);
    await imports.dismiss('1', 'soil');
    await letGo();
    expect(names(imports)).toEqual([]);
  });
});

describe('a line that comes late', () => {
  const states = (imports: ReturnType<typeof useImportsStore>) => imports.lines.map(({ id, state }) => [id, state]);

  it('does not undo an answer that was given after it was asked for', async () => {
    const imports = useImportsStore();
    isHolding = false;
    stored = [{ id: 'soil', fileName: 'soil.zip', state: 'asks' }];
    await imports.load('1');
    isHolding = true;
    const asking = imports.refresh('1', 'soil');
    await expect.poll(() => held.length).toBe(1);
    await imports.answer('1', 'soil', { purpose: 'soil' });
    held.forEach((answer) => answer());
    await asking;
    expect(states(imports)).toEqual([['soil', 'ready']]);
  });

  it('does not bring itself back after it was dismissed', async () => {
    const imports = useImportsStore();
    isHolding = false;
    await imports.load('1');
    isHolding = true;
    const asking = imports.refresh('1', 'soil');
    await expect.poll(() => held.length).toBe(1);
    await imports.dismiss('1', 'soil');
    held.forEach((answer) => answer());
    await asking;
    expect(states(imports)).toEqual([]);
  });

  it('is shown as it is now when an answer comes after somebody else’s', async () => {
    const imports = useImportsStore();
    isHolding = false;
    stored = [{ id: 'soil', fileName: 'soil.zip', state: 'asks' }];
    await imports.load('1');
    stored = [{ id: 'soil', fileName: 'soil.zip', state: 'done' }];
    await expect(imports.answer('1', 'soil', { purpose: 'soil' })).rejects.toMatchObject({ status: 409 });
    expect(states(imports)).toEqual([['soil', 'done']]);
  });

  it('of another estate is not shown', async () => {
    const imports = useImportsStore();
    const letGo = await loadingSlowly(imports);
    isHolding = false;
    const second = imports.load('2');
    await second;
    await letGo();
    expect(names(imports)).toEqual(['other.zip']);
  });
});

describe('answers in order', () => {
  it('takes the answer of the newest request, whichever comes last', async () => {
    const taken: string[] = [];
    const newest = inOrder();
    let answerFirst = (_text: string): void => undefined;
    const first = newest(() => new Promise<string>((resolve) => (answerFirst = resolve)), (text) => taken.push(text));
    await newest(() => Promise.resolve('second'), (text) => taken.push(text));
    answerFirst('first');
    await first;
    expect(taken).toEqual(['second']);
  });
});
