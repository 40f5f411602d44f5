import { once } from 'node:events';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterEach, expect, test } from 'vitest';
import { waitForAnswer } from '../../../scripts/process/untilReady.mjs';

const open: Server[] = [];
afterEach(async () => {
  await Promise.all(open.splice(0).map((server) => new Promise((closed) => {
    server.close(closed);
    server.closeAllConnections();
  })));
});

/** A server that does with its requests, in order, what is said; the last for all that follow. */
async function served(...deeds: ('hang' | number)[]) {
  const asked: string[] = [];
  const server = createServer((request, response) => {
    const deed = deeds[Math.min(asked.length, deeds.length - 1)]!;
    asked.push(request.url ?? '');
    if (deed !== 'hang') response.writeHead(deed).end('{}');
  });
  open.push(server);
  await once(server.listen(0, '127.0.0.1'), 'listening');
  return { url: `http://127.0.0.1:${(server.address() as AddressInfo).port}/api/ready`, asked };
}
const quick = { isRunning: () => true, withinMs: 2_000, tryMs: 100, pauseMs: 5 };

test('a first connection that hangs is one try, and the next finds the server', async () => {
  const { url, asked } = await served('hang', 503, 200);
  expect(await waitForAnswer(url, quick)).toBeNull();
  expect(asked).toHaveLength(3);
});

test('an answer is not asked of a proxy', async () => {
  const { url } = await served(200);
  const proxy = await served(502);
  process.env.http_proxy = process.env.HTTP_PROXY = proxy.url;
  try {
    expect(await waitForAnswer(url, quick)).toBeNull();
  } finally {
    delete process.env.http_proxy;
    delete process.env.HTTP_PROXY;
  }
  expect(proxy.asked).toEqual([]);
});

test('what was tried is said when there is no answer', async () => {
  const silent = await served('hang', 503);
  expect(await waitForAnswer(silent.url, { ...quick, withinMs: 300 })).toMatch(/^Asked in \d+ s: no answer within 0\.1 s \(1×\), status 503 \(\d+×\)\.$/);
  const nobody = await waitForAnswer('http://127.0.0.1:9/', { ...quick, withinMs: 50 });
  expect(nobody).toMatch(/ECONNREFUSED \(\d+×\)/);
});

test('a machine that slept through the time asks once more', async () => {
  const { url } = await served(200);
  expect(await waitForAnswer(url, { ...quick, withinMs: -1 })).toBeNull();
});

test('nothing is waited for when the program has ended', async () => {
  const { url, asked } = await served('hang');
  expect(await waitForAnswer(url, { ...quick, isRunning: () => asked.length < 2 })).toBeNull();
  expect(asked).toHaveLength(2);
});
