import type { Map as MlMap } from 'maplibre-gl';
import { describe, expect, it } from 'vitest';
import { ref, shallowRef } from 'vue';
import { useMapPick } from '../../src/components/map/useMapPick.ts';

/** As much of a map as choosing needs: one zone lies under every press. */
function mapOverOneZone() {
  const heard = new Map<string, (event: object) => void>();
  const canvas = { style: { cursor: 'crosshair' } };
  const map = { on: (name: string, act: (event: object) => void) => heard.set(name, act), queryRenderedFeatures: () => [{ properties: { id: 'zone 2' } }], setFeatureState: () => {}, getCanvas: () => canvas };
  return { map: shallowRef(map as unknown as MlMap), press: (name: string) => heard.get(name)!({ point: { x: 1, y: 1 }, preventDefault: () => {} }), canvas };
}

describe('choosing on the map', () => {
  it('rests while something is drawn on it, so that a corner chooses no zone', () => {
    const { map, press, canvas } = mapOverOneZone();
    const [chosen, drawing, opened] = [ref<string | null>('zone 1'), ref(true), ref<string[]>([])];
    useMapPick(map, { pick: () => 'zone', isOff: () => drawing.value, chosen, open: (id) => opened.value.push(id) });
    for (const name of ['click', 'dblclick', 'mousemove']) press(name);
    expect([chosen.value, opened.value, canvas.style.cursor]).toEqual(['zone 1', [], 'crosshair']);
    drawing.value = false;
    for (const name of ['click', 'dblclick', 'mousemove']) press(name);
    expect([chosen.value, opened.value, canvas.style.cursor]).toEqual(['zone 2', ['zone 2'], 'pointer']);
  });
});
