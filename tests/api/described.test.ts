import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { operations } from '../../server/routes/openapi.ts';
import { routesOf } from './support/routesOf.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

let app: TestApp;
beforeAll(async () => void (app = await startTestApp()));
afterAll(() => app.close());

interface Parameter {
  name: string;
  in: string;
  required: boolean;
}
interface Described {
  openapi: string;
  paths: Record<string, Record<string, { parameters: Parameter[]; responses: Record<string, { content?: Record<string, unknown> }> }>>;
}

const described = async () => (await (await app.browser()).get('/api/openapi.json')).body as Described;

describe('the description of the interface', () => {
  it('has every route that is served, and no other', () => {
    const served = routesOf(app.application).flatMap(({ method, path, belowEstate }) => (method === 'all' ? ['post'] : [method]).map((each) => `${each} ${belowEstate ? '/estates/:estateId' : ''}${path === '/' ? '' : path}`));
    expect(Object.keys(operations).toSorted()).toEqual([...new Set(served)].filter((route) => route !== 'get /openapi.json').toSorted());
  });

  it('names every part of an address and what may follow its question mark', async () => {
    const { paths } = await described();
    const letter = paths['/api/estates/{estateId}/blocks/{blockId}/season-letter']!.get!;
    expect(letter.parameters.map(({ name, in: where, required }) => `${where} ${name} ${required}`)).toEqual(['path estateId true', 'path blockId true', 'query size false']);
    const parts = paths['/api/estates/{estateId}/lots/{lotId}/parts']!.put!;
    expect(parts.parameters.map(({ name }) => name)).toEqual(['estateId', 'lotId', 'x-csrf-token', 'if-match']);
  });

  it('says with which status and in which form an operation answers', async () => {
    const { openapi, paths } = await described();
    expect(openapi).toBe('3.1.0');
    expect(Object.keys(paths['/api/estates/{estateId}/blocks/{blockId}/zonings']!.post!.responses)).toEqual(['202', 'default']);
    expect(paths['/api/estates/{estateId}/notices/{noticeId}/sheet']!.get!.responses['200']!.content).toEqual({ 'application/pdf': {} });
    expect(paths['/api/estates/{estateId}/lots/{lotId}']!.delete!.responses['204']!.content).toBeUndefined();
  });
});
