import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { h, nextTick } from 'vue';
import LedgerMapTwin from '../../src/components/base/LedgerMapTwin.vue';
import { mountWithTexts } from './mountWithTexts.ts';

describe('ledger and map', () => {
  let size: (entries: { contentRect: { width: number } }[]) => void = () => undefined;
  let sight: (entries: { isIntersecting: boolean }[]) => void = () => undefined;
  beforeEach(() => {
    vi.stubGlobal('ResizeObserver', class { observe = () => undefined; disconnect = () => undefined; constructor(callback: typeof size) { size = callback; } });
    vi.stubGlobal('IntersectionObserver', class { observe = () => undefined; disconnect = () => undefined; constructor(callback: typeof sight) { sight = callback; } });
    Element.prototype.scrollIntoView = vi.fn();
  });
  afterEach(() => vi.unstubAllGlobals());

  it.each([[390, false, true], [390, true, false], [1440, false, false]])('at %i px with the map in sight: %s leads to the map by a button: %s', async (width, isIntersecting, leads) => {
    const twin = await mountWithTexts(LedgerMapTwin, { props: { screen: 'test' }, slots: { ledger: () => h('p', 'Lines'), map: () => h('p', 'Ground') } });
    size([{ contentRect: { width } }]);
    sight([{ isIntersecting }]);
    await nextTick();
    const button = twin.findAll('button').find((one) => one.text() === 'See the map');
    expect(button !== undefined).toBe(leads);
    await button?.trigger('click');
    expect(vi.mocked(Element.prototype.scrollIntoView).mock.contexts.map((element) => (element as Element).textContent)).toEqual(leads ? ['Ground'] : []);
    twin.unmount();
  });
});
