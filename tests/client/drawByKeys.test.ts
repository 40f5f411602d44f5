import { afterEach, describe, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import type { Map as MlMap } from 'maplibre-gl';
import DrawByKeys from '../../src/components/map/DrawByKeys.vue';
import type { Corners } from '../../src/components/map/outline.ts';
import { mountWithTexts } from './mountWithTexts.ts';

let wrapper: VueWrapper;
afterEach(() => wrapper.unmount());

describe('a shape drawn by keys', () => {
  it('takes the middle of the map at Space and at its button, and lets the last go at Backspace', async () => {
    const canvas = document.createElement('canvas');
    const centre = { lng: 1, lat: 2 };
    const map = { getCanvas: () => canvas, getCenter: () => centre, project: ([x, y]: [number, number]) => ({ x: 10 * x, y: 10 * y }), on: () => {}, off: () => {} } as unknown as MlMap;
    let corners: Corners = [];
    wrapper = await mountWithTexts(DrawByKeys, { props: { map, corners, 'onUpdate:corners': (now: Corners) => void wrapper.setProps({ corners: (corners = now) }) } });
    const press = async (key: string) => {
      const event = new KeyboardEvent('keydown', { key, cancelable: true });
      canvas.dispatchEvent(event);
      await wrapper.vm.$nextTick();
      return event.defaultPrevented;
    };
    expect(wrapper.find('.cross').exists()).toBe(false);
    // Arrows stay the map's own.
    expect(await press('ArrowRight')).toBe(false);
    expect(wrapper.find('.cross').exists()).toBe(true);
    expect(await press(' ')).toBe(true);
    [centre.lng, centre.lat] = [3, 4.00000004];
    await wrapper.find('button').trigger('click');
    expect(corners).toEqual([[1, 2], [3, 4]]);
    expect(wrapper.findAll('.dot').map((dot) => dot.attributes('style'))).toEqual(['left: 10px; top: 20px;', 'left: 30px; top: 40px;']);
    expect(await press('Backspace')).toBe(true);
    expect(corners).toEqual([[1, 2]]);
    expect(await press('x')).toBe(false);
  });
});
