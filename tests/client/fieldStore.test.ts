import { createPinia, setActivePinia } from 'pinia';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { useContactStore } from '../../src/stores/contact.ts';
import { useFieldStore } from '../../src/stores/field.ts';

beforeEach(() => {
  localStorage.clear();
  setActivePinia(createPinia());
});
afterEach(() => vi.unstubAllGlobals());

describe('a browser that gives no store', () => {
  it('lets sending, closing and going on end quietly, and says that nothing was noted', async () => {
    // Some private windows have none at all; where it is, opening fails.
    expect(globalThis.indexedDB).toBeUndefined();
    vi.stubGlobal('fetch', () => Promise.reject(new TypeError('no network')));
    const field = useFieldStore();
    await field.begin('7a8d4c31-9b68-45a1-9651-fb21167895a2', 'somebody');
    await expect(field.send()).resolves.toBeUndefined();
    await expect(field.sendOthers()).resolves.toBeUndefined();
    expect(await field.closeRound('round')).toBe(false);
    await expect(field.reopenRound('round')).resolves.toBeUndefined();
    expect(field).toMatchObject({ isSending: false, isCounted: false, waiting: 0 });
  });
});

describe('the last contact', () => {
  it('is remembered by the phone, also when the page is opened again without signal', () => {
    useContactStore().note(true, new Date('2026-09-01T07:41:00Z'));
    setActivePinia(createPinia());
    const again = useContactStore();
    expect(again.lastContactAt).toBe('2026-09-01T07:41:00.000Z');
    again.note(false, new Date('2026-09-01T09:00:00Z'));
    expect(again.lastContactAt).toBe('2026-09-01T07:41:00.000Z');
  });
});
