import { flushPromises } from '@vue/test-utils';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { defineComponent, h } from 'vue';
import { defineGrid } from '../../shared/analysis/grid.ts';
import { joinedBands, WHOLE_MEMBERSHIP } from '../../shared/analysis/zoneMemberships.ts';
import type { BlockView } from '../../shared/contracts/blocks.ts';
import type { ZoningMemberships, ZoningView } from '../../shared/contracts/zonings.ts';
import EditedZonesMap from '../../src/components/zones/EditedZonesMap.vue';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const boundary = { type: 'MultiPolygon', coordinates: [[[[3, 45], [3.001, 45], [3.001, 45.001], [3, 45.001], [3, 45]]]] as [number, number][][][] };
const block = { id: 'b', name: 'Millrace', boundary, cellSizeM: 10, rowBearingDeg: 0 } as unknown as BlockView;
const { inside } = defineGrid(boundary.coordinates, 10);
const text = (bytes: Uint8Array) => Buffer.from(bytes).toString('base64');
const answer = (changedByHand: boolean): ZoningMemberships => ({ changedByHand, labels: text(Uint8Array.from(inside)), memberships: text(joinedBands([inside.map(() => WHOLE_MEMBERSHIP), inside.map(() => 0)])) });
const zone = (number: number) => ({ id: `z${number}`, number, name: '', colour: null, geometry: boundary });
const zoningOf = (certainty: ZoningView['certainty'], { zones = 2, revision = 1 } = {}) => ({ id: 'a', revision, shown: 2, certainty, standsOut: null, zones: Array.from({ length: zones }, (_, at) => zone(at + 1)) }) as unknown as ZoningView;

/** The map cannot be drawn here; what it is given can be seen. */
const Drawn = defineComponent({ inheritAttrs: false, props: ['zones', 'rasters', 'withPills', 'doubt', 'drawing'], setup: (_, { slots }) => () => h('div', slots.default?.()) });
async function open(zoning: ZoningView, memberships = vi.fn(() => Promise.resolve(answer(false)))) {
  const page = await mountWithTexts(EditedZonesMap, { props: { block, zoning, doubt: { vines: 9, doubtful: 3, byZone: [], runs: [], geometry: boundary as never }, relief: null, memberships, chosen: null, pen: null, corners: [] }, global: { stubs: { EstateMap: Drawn } } });
  const map = () => page.findComponent(Drawn).props() as { zones: unknown[]; rasters: unknown[]; withPills: boolean; doubt: unknown };
  const toggle = () => page.findAll('button').find((button) => /certainty on the map/.test(button.text()));
  return { page, map, toggle, memberships };
}
let opened: Awaited<ReturnType<typeof open>> | null = null;
afterEach(() => opened?.page.unmount());

describe('certainty on the map of edited zones', () => {
  it('is off until it is asked for, then takes the place of the hatching and can be taken off again', async () => {
    opened = await open(zoningOf('kept'));
    const { page, map, toggle, memberships } = opened;
    expect([map().rasters, memberships.mock.calls]).toEqual([[], []]);
    expect(map().doubt).toEqual(boundary);
    await toggle()!.trigger('click');
    await flushPromises();
    expect(memberships).toHaveBeenCalledWith({ id: 'a', zones: 2, revision: 1 });
    expect(map()).toMatchObject({ rasters: [{ id: 'certainty' }], doubt: null, withPills: true });
    expect(textOf(page.element.parentElement)).toContain('Certainty of zones');
    expect(textOf(page.element.parentElement)).not.toContain('those of the run');
    await toggle()!.trigger('click');
    expect(map()).toMatchObject({ rasters: [], doubt: boundary });
  });

  it('says after an edit that it is the run’s, under the lines of now without their numbers, and never goes out meanwhile', async () => {
    opened = await open(zoningOf('kept'));
    const { page, map, toggle, memberships } = opened;
    await toggle()!.trigger('click');
    await flushPromises();
    let arrive: (found: ZoningMemberships) => void = () => undefined;
    memberships.mockImplementationOnce(() => new Promise((resolve) => (arrive = resolve)));
    await page.setProps({ zoning: zoningOf('kept', { zones: 3, revision: 2 }) });
    expect(map().rasters).toHaveLength(1);
    arrive(answer(true));
    await flushPromises();
    expect(map()).toMatchObject({ rasters: [{ id: 'certainty' }], withPills: false });
    expect(map().zones).toHaveLength(3);
    expect(textOf(page.element.parentElement)).toContain('Colours and numbers are those of the run; the lines are the zones as they are now');
  });

  it('says why there is none, and asks for none', async () => {
    for (const [certainty, why] of [['none', 'drawn by hand'], ['older', 'run the zoning again']] as const) {
      opened = await open(zoningOf(certainty));
      await opened.toggle()!.trigger('click');
      await flushPromises();
      expect([opened.memberships.mock.calls, opened.map().rasters]).toEqual([[], []]);
      const button = opened.toggle()!.element;
      expect(button.getAttribute('aria-disabled')).toBe('true');
      expect(textOf(document.getElementById(button.getAttribute('aria-describedby')!))).toContain(why);
      if (certainty === 'none') opened.page.unmount();
    }
  });

  it('is offered for one zone only where a hand joined those of the run', async () => {
    opened = await open(zoningOf('none', { zones: 1 }));
    expect(opened.toggle()).toBeUndefined();
    await opened.page.setProps({ zoning: zoningOf('kept', { zones: 1 }) });
    expect(opened.toggle()).toBeDefined();
  });

  it('is not read while the pen is held, whose taps are corners', async () => {
    opened = await open(zoningOf('kept'));
    await opened.toggle()!.trigger('click');
    await flushPromises();
    expect(opened.page.findComponent({ name: 'MapReading' }).exists()).toBe(true);
    await opened.page.setProps({ pen: { kind: 'split', zone: 1 } });
    expect([opened.page.findComponent({ name: 'MapReading' }).exists(), opened.map().rasters]).toEqual([false, [expect.anything()]]);
  });
});
