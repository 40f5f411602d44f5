import { afterEach, describe, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import type { Map as MlMap } from 'maplibre-gl';
import SetCorners from '../../src/components/map/SetCorners.vue';
import type { Corners } from '../../src/components/map/outline.ts';
import { mountWithTexts } from './mountWithTexts.ts';

let wrapper: VueWrapper;
afterEach(() => wrapper.unmount());

/** A map on which a degree is ten pixels wide, with its middle at 1, 2. */
async function mountOn({ least = 3, before = [] as Corners } = {}) {
  const canvas = document.createElement('canvas');
  const centre = { lng: 1, lat: 2 };
  const heard = new Map<string, (event: object) => void>();
  const zoom = { isOn: true };
  const map = {
    getCanvas: () => canvas, getCenter: () => centre, project: ([x, y]: [number, number]) => ({ x: 10 * x, y: 10 * y }),
    on: (name: string, listener: (event: object) => void) => (heard.set(name, listener), { unsubscribe: () => heard.delete(name) }),
    doubleClickZoom: { enable: () => (zoom.isOn = true), disable: () => (zoom.isOn = false) },
  };
  const state = { corners: before, adding: true };
  wrapper = await mountWithTexts(SetCorners, { props: { map: map as unknown as MlMap, least, ...state, 'onUpdate:corners': (corners: Corners) => void wrapper.setProps({ corners: (state.corners = corners) }), 'onUpdate:adding': (adding: boolean) => (state.adding = adding) } });
  const press = async (key: string) => {
    const event = new KeyboardEvent('keydown', { key, cancelable: true });
    canvas.dispatchEvent(event);
    await wrapper.vm.$nextTick();
    return event.defaultPrevented;
  };
  const tell = async (name: string, x: number, y: number) => {
    heard.get(name)!({ point: { x: 10 * x, y: 10 * y }, lngLat: { lng: x, lat: y } });
    await wrapper.vm.$nextTick();
  };
  const drawn = () => wrapper.find('polygon, polyline').attributes('points');
  return { state, centre, heard, zoom, press, click: (x: number, y: number) => tell('click', x, y), point: (x: number, y: number) => tell('mousemove', x, y), drawn };
}

describe('a shape set corner by corner', () => {
  it('takes the middle of the map at Space and at its button, and lets the last go at Backspace', async () => {
    const { state, centre, press } = await mountOn();
    expect(wrapper.find('.cross').exists()).toBe(false);
    // Arrows stay the map's own.
    expect(await press('ArrowRight')).toBe(false);
    expect(wrapper.find('.cross').exists()).toBe(true);
    expect(await press(' ')).toBe(true);
    [centre.lng, centre.lat] = [3, 4.00000004];
    await wrapper.find('button').trigger('click');
    expect(state.corners).toEqual([[1, 2], [3, 4]]);
    expect(wrapper.findAll('.dot').map((dot) => [dot.attributes('cx'), dot.attributes('cy')])).toEqual([['10', '20'], ['30', '40']]);
    expect(await press('Backspace')).toBe(true);
    expect(state.corners).toEqual([[1, 2]]);
    expect(await press('x')).toBe(false);
  });

  it('goes on from keys to pointer and back with every corner', async () => {
    const { state, press, click, point, drawn } = await mountOn();
    await press(' ');
    await click(10, 2);
    await click(10, 10);
    expect(wrapper.find('.cross').exists()).toBe(false);
    await point(1, 10);
    expect(drawn()).toBe('10,20 100,20 100,100 10,100');
    await press(' ');
    expect(state.corners).toEqual([[1, 2], [10, 2], [10, 10], [1, 2]]);
    await press('Backspace');
    await click(1, 10);
    expect(state).toEqual({ corners: [[1, 2], [10, 2], [10, 10], [1, 10]], adding: true });
    await click(1.5, 2.5);
    expect(state).toEqual({ corners: [[1, 2], [10, 2], [10, 10], [1, 10]], adding: false });
  });

  it('ends at a second press on the last corner and at Enter, with corners enough', async () => {
    const { state, press, click } = await mountOn({ least: 2 });
    await click(5, 5);
    await click(5, 5);
    await press('Enter');
    expect(state).toEqual({ corners: [[5, 5]], adding: true });
    await click(9, 9);
    // Back to its beginning a line may go.
    await click(5, 5);
    expect(state).toEqual({ corners: [[5, 5], [9, 9], [5, 5]], adding: true });
    await click(5, 5);
    expect(state.adding).toBe(false);
    state.adding = true;
    await press('Enter');
    expect(state).toEqual({ corners: [[5, 5], [9, 9], [5, 5]], adding: false });
  });

  it('begins anew over a shape of before, which stays until the first corner is set and when it is let go', async () => {
    const before: Corners = [[1, 1], [9, 1], [9, 9]];
    const kept = await mountOn({ before });
    await kept.press('Enter');
    expect(kept.state).toEqual({ corners: before, adding: true });
    await kept.press('Escape');
    expect(kept.state).toEqual({ corners: before, adding: false });
    wrapper.unmount();
    const { state, press, click } = await mountOn({ before });
    await click(1, 1);
    await click(20, 20);
    expect(state.corners).toEqual([[1, 1], [20, 20]]);
    await press('Escape');
    expect(state).toEqual({ corners: [], adding: true });
    await press('Escape');
    expect(state.adding).toBe(false);
  });

  it('leaves the map as it was', async () => {
    const { heard, zoom } = await mountOn();
    expect([heard.size, zoom.isOn]).toEqual([5, false]);
    wrapper.unmount();
    expect([heard.size, zoom.isOn]).toEqual([0, true]);
    await mountOn();
  });
});
