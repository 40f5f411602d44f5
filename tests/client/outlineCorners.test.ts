import { afterEach, describe, expect, it, vi } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import { defineComponent, h, ref, shallowRef } from 'vue';
import type { Corners } from '../../src/components/map/outline.ts';
import OutlineCorners from '../../src/components/map/OutlineCorners.vue';
import { useUndoKeys } from '../../src/composables/useUndoKeys.ts';
import { mountWithTexts } from './mountWithTexts.ts';

const line: Corners = [[1, 2], [3, 4]];
let wrapper: VueWrapper;
afterEach(() => {
  wrapper.unmount();
  vi.restoreAllMocks();
});

/** The list inside a screen with undo keys of its own, as on the zone editor; `isOpen`: the pen is held. */
async function mountInScreen(start: Corners = []) {
  const corners = shallowRef<Corners>(start);
  const isOpen = ref(true);
  const screen = { undo: vi.fn(), redo: vi.fn() };
  const now = vi.spyOn(performance, 'now').mockReturnValue(0);
  const Screen = defineComponent(() => {
    useUndoKeys(screen);
    return () => (isOpen.value ? h(OutlineCorners, { corners: corners.value, least: 2, 'onUpdate:corners': (next: Corners) => (corners.value = next) }) : h('p'));
  });
  wrapper = await mountWithTexts(Screen);
  const settled = () => wrapper.vm.$nextTick();
  const put = async (next: Corners, atMs: number) => {
    now.mockReturnValue(atMs);
    corners.value = next;
    await settled();
  };
  const press = async (key: string, more: KeyboardEventInit = {}) => {
    document.dispatchEvent(new KeyboardEvent('keydown', { key, ctrlKey: true, cancelable: true, ...more }));
    await settled();
  };
  return { corners, isOpen, screen, put, press, settled };
}

describe('corners taken back while a shape is drawn', () => {
  it('steps back and forth by keys, and leaves the edits behind the pen alone until it is put down', async () => {
    const { corners, isOpen, screen, put, press, settled } = await mountInScreen();
    await put([[1, 2]], 0);
    await put(line, 5000);
    await put([], 9000);
    await press('z');
    expect(corners.value).toEqual(line);
    await press('z');
    await press('z');
    await press('z');
    expect(corners.value).toEqual([]);
    await press('y');
    await press('Z', { shiftKey: true });
    expect(corners.value).toEqual(line);
    expect([screen.undo.mock.calls.length, screen.redo.mock.calls.length]).toEqual([0, 0]);
    isOpen.value = false;
    await settled();
    await press('z');
    await press('y');
    expect([screen.undo.mock.calls.length, screen.redo.mock.calls.length]).toEqual([1, 1]);
  });

  it('takes a dragged corner back in one step, and two drags in two', async () => {
    const { corners, put, press } = await mountInScreen(line);
    for (const [step, atMs] of [5, 6, 7].map((lon) => [lon, 3000 + lon * 16] as const)) await put([[1, 2], [step, 4]], atMs);
    await put([[1, 2], [8, 4]], 6000);
    await put([[0, 2], [8, 4]], 6100);
    await press('z');
    expect(corners.value).toEqual([[1, 2], [8, 4]]);
    await press('z');
    expect(corners.value).toEqual([[1, 2], [7, 4]]);
    await press('z');
    expect(corners.value).toEqual(line);
  });

  it('has a button for it once there is something to take back; a new corner ends what was taken back', async () => {
    const { corners, put, press } = await mountInScreen(line);
    const back = () => wrapper.findAll('button').find((button) => button.text() === 'One step back');
    expect(back()).toBeUndefined();
    await put([...line, [5, 6]], 0);
    await back()!.trigger('click');
    expect(corners.value).toEqual(line);
    expect(back()).toBeUndefined();
    await put([...line, [7, 8]], 0);
    await press('y');
    expect(corners.value).toEqual([...line, [7, 8]]);
  });
});
