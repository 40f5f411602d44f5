import { beforeEach, expect, it } from 'vitest';
import { forgetUnfinished, unfinishedUploads } from '../../src/lib/unfinishedUploads.ts';

/** What a browser remembers of large files whose page was closed, as the tus client writes it. */

const endpoint = '/api/estates/a/imports/pieces';
const now = Date.parse('2026-07-14T12:00:00Z');
const keep = (name: string, startedAt: string, to = endpoint) => localStorage.setItem(`tus::tus-br-${name}-image/tiff-300-1-${to}::1`, JSON.stringify({ size: 300, metadata: { filename: name }, creationTime: startedAt }));

beforeEach(() => localStorage.clear());

it('lists files of this estate that were begun within a day, newest first, and forgets one', () => {
  keep('early.tif', '2026-07-14T08:00:00Z');
  keep('late.tif', '2026-07-14T11:00:00Z');
  keep('yesterday.tif', '2026-07-13T11:00:00Z');
  keep('elsewhere.tif', '2026-07-14T11:00:00Z', '/api/estates/b/imports/pieces');
  const found = unfinishedUploads(endpoint, now);
  expect(found.map(({ fileName, bytes }) => [fileName, bytes])).toEqual([['late.tif', 300], ['early.tif', 300]]);
  forgetUnfinished(found[0]!);
  expect(unfinishedUploads(endpoint, now).map(({ fileName }) => fileName)).toEqual(['early.tif']);
});

it('passes over what is no upload of ours', () => {
  localStorage.setItem(`tus::tus-br-x-${endpoint}::1`, 'no JSON');
  localStorage.setItem(`tus::tus-br-y-${endpoint}::1`, '{"size":"much","metadata":{},"creationTime":"x"}');
  localStorage.setItem('theme', 'dark');
  expect(unfinishedUploads(endpoint, now)).toEqual([]);
});
