/**
 * How fast a running server answers while it zones: the requests of a person who looks around, first at rest, then with zonings
 * of all blocks together following one another. `npm start` in one shell, `npm run bench -- --requests http://localhost:3000` in
 * another; it signs in as the demo estate's agronomist and leaves proposals behind.
 */

import type { BlockLine } from '../../shared/contracts/blocks.ts';
import type { Session } from '../../shared/contracts/session.ts';

export interface RequestRow {
  readonly during: 'rest' | 'zoning';
  readonly requests: number;
  readonly medianMs: number;
  readonly p95Ms: number;
  readonly slowestMs: number;
  /** 95th percentile of each kind of request. */
  readonly p95MsOf: Readonly<Record<string, number>>;
  /** Zonings that were done meanwhile. */
  readonly zonings: number;
}

const person = { email: 'agronomist@demo.example', password: 'patchrow-demo' };
const pauseMs = 20;

interface Ask {
  (method: string, path: string, body?: object): Promise<{ body: unknown; ms: number }>;
}

export async function* benchRequests(address: string, seconds: number): AsyncGenerator<RequestRow> {
  const ask = await signedIn(address);
  const { estates } = (await ask('GET', '/api/session')).body as Session;
  const base = `/api/estates/${estates[0]!.id}`;
  const { items: blocks } = (await ask('GET', `${base}/blocks`)).body as { items: BlockLine[] };
  const { block, layerId, others } = await widestLayer(ask, base, blocks);
  const kinds = { blocks: `${base}/blocks`, block: `${base}/blocks/${block}`, layers: `${base}/blocks/${block}/layers`, rows: `${base}/blocks/${block}/rows`, zones: `${base}/zones`, runs: `${base}/blocks/${block}/zonings`, session: '/api/session' };
  const measure = async (during: RequestRow['during'], until: () => boolean): Promise<Omit<RequestRow, 'zonings'>> => {
    const times: { kind: string; ms: number }[] = [];
    while (!until()) {
      for (const [kind, path] of Object.entries(kinds)) {
        times.push({ kind, ms: (await ask('GET', path)).ms });
        await new Promise((resume) => setTimeout(resume, pauseMs));
      }
    }
    const all = times.map(({ ms }) => ms);
    return { during, requests: all.length, medianMs: quantile(all, 0.5), p95Ms: quantile(all, 0.95), slowestMs: Math.max(...all), p95MsOf: Object.fromEntries(Object.keys(kinds).map((kind) => [kind, quantile(times.filter((time) => time.kind === kind).map(({ ms }) => ms), 0.95)])) };
  };
  const after = (ms: number) => {
    const end = performance.now() + ms;
    return () => performance.now() > end;
  };
  await measure('rest', after(1000));
  yield { ...(await measure('rest', after(1000 * seconds))), zonings: 0 };
  let zonings = 0;
  let isOver = false;
  const zoning = (async () => {
    for (let seed = 1; !isOver; seed++, zonings++) {
      const { jobId } = (await ask('POST', `${base}/blocks/${block}/zonings`, { layers: [{ layerId }], withBlocks: others, seed })).body as { jobId: string };
      for (let state = 'waiting'; state !== 'done' && state !== 'failed'; ) {
        await new Promise((resume) => setTimeout(resume, 100));
        state = ((await ask('GET', `${base}/jobs/${jobId}`)).body as { state: string }).state;
      }
    }
  })();
  const row = await measure('zoning', after(1000 * seconds));
  isOver = true;
  await zoning;
  yield { ...row, zonings };
}

/** The measured layer that lies on most blocks, so that zoning them together is as much work as the estate has. */
async function widestLayer(ask: Ask, base: string, blocks: readonly BlockLine[]): Promise<{ block: string; layerId: string; others: string[] }> {
  const on = new Map<string, string[]>();
  for (const { id } of blocks) {
    const { items } = (await ask('GET', `${base}/blocks/${id}/layers`)).body as { items: { id: string; type: string; readiness: string }[] };
    for (const layer of items) if (layer.type === 'vigour' && layer.readiness !== 'blocked' && layer.readiness !== 'stale') on.set(layer.id, [...(on.get(layer.id) ?? []), id]);
  }
  const [widest] = [...on].sort((a, b) => b[1].length - a[1].length);
  if (widest === undefined) throw new Error('No block of this estate has a layer of vigour; import one first.');
  const [layerId, [block, ...others]] = widest;
  return { block: block!, layerId, others };
}

/** Asks with the session's cookie and token; an answer that is no success is an error. */
async function signedIn(address: string): Promise<Ask> {
  const cookies = new Map<string, string>();
  let token = '';
  const ask: Ask = async (method, path, body) => {
    const start = performance.now();
    const answer = await fetch(new URL(path, address), { method, headers: { cookie: [...cookies].map((pair) => pair.join('=')).join('; '), ...(method === 'GET' ? {} : { 'content-type': 'application/json', 'x-csrf-token': token }) }, ...(body === undefined ? {} : { body: JSON.stringify(body) }) });
    const text = await answer.text();
    const ms = performance.now() - start;
    if (!answer.ok) throw new Error(`${method} ${path} answered ${answer.status}: ${text.slice(0, 200)}`);
    for (const cookie of answer.headers.getSetCookie()) cookies.set(...(cookie.split(';')[0]!.split(/=(.*)/s) as [string, string]));
    return { body: text === '' ? null : JSON.parse(text), ms };
  };
  token = ((await ask('GET', '/api/session')).body as Session).csrfToken;
  await ask('POST', '/api/session', person);
  token = ((await ask('GET', '/api/session')).body as Session).csrfToken;
  return ask;
}

function quantile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.ceil(share * sorted.length) - 1)]!;
}
