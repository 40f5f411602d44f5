import { afterEach, describe, expect, it, vi } from 'vitest';
import { newId } from '../../src/lib/newId.ts';

afterEach(() => vi.unstubAllGlobals());

describe('an id', () => {
  it('is a UUID of version 4 also where the page has no secure address', () => {
    const { getRandomValues } = crypto;
    vi.stubGlobal('crypto', { getRandomValues: getRandomValues.bind(crypto) });
    const ids = Array.from({ length: 200 }, () => newId());
    for (const id of ids) expect(id).toMatch(/^[0-9a-f]{8}-[0-9a-f]{4}-4[0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/);
    expect(new Set(ids).size).toBe(200);
  });
});
