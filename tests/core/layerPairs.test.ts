import { describe, expect, it } from 'vitest';
import { layerPairs, mostAlike } from '../../shared/analysis/layerPairs.ts';
import { zoneDifferences } from '../../shared/analysis/zoningStats.ts';

const layer = (id: string, values: readonly number[], kind: 'number' | 'class' = 'number') => ({ id, kind, smoothed: Float32Array.from(values) });
const first = layer('first', [3.1, 2.4, NaN, 5.6, 4.4, 1.2, 3.9]);
const second = layer('second', [7, 9.5, 1, NaN, 6.1, 9.9, 8.2]);

describe('how alike layers are', () => {
  it('is the correlation over the cells of both, as numpy has it', () => {
    const [pair, ...rest] = layerPairs([first, second]);
    expect(pair).toMatchObject({ one: 'first', other: 'second' });
    expect(pair!.correlation).toBeCloseTo(-0.8465871489, 6);
    expect(rest).toEqual([]);
  });

  it('is not asked of classes, of layers that share no cells or of one that is the same there', () => {
    const classes = layer('map', [1, 1, 2, 2, 1, 1, 2], 'class');
    const flat = layer('flat', [4, 4, 9, 4, 4, 4, 4]);
    const elsewhere = layer('elsewhere', [NaN, NaN, 1, NaN, NaN, NaN, NaN]);
    expect(layerPairs([first, classes, flat, elsewhere])).toEqual([]);
  });

  it('names for each layer the one most like it, also where one rises as the other falls', () => {
    const pairs = [{ one: 'a', other: 'b', correlation: 0.4 }, { one: 'c', other: 'a', correlation: -0.8 }, { one: 'b', other: 'c', correlation: 0.1 }];
    expect(['a', 'b', 'c', 'd'].map((id) => mostAlike(pairs, id))).toEqual([{ layerId: 'c', correlation: -0.8 }, { layerId: 'a', correlation: 0.4 }, { layerId: 'a', correlation: -0.8 }, null]);
  });
});

describe('how much of a layer lies between zones', () => {
  const zones = (layerId: string, groups: readonly (readonly number[])[]) => groups.map((values) => {
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
    return { layers: [{ layerId, n: values.length, mean, sd: Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length) }] };
  });

  it('is R² of the analysis of variance by zone, as R has it for zones of unlike size', () => {
    const [found] = zoneDifferences(zones('brix', [[21, 21.4, 20.8, 21.9, 21.2], [22.5, 22.9, 23.1, 22.2, 22.8], [24, 23.6, 24.4, 23.9]]), ['brix']);
    expect(found!.explained).toBeCloseTo(0.914921249, 8);
    expect(found!.withinSd).toBeCloseTo(Math.sqrt(1.5395 / 14), 8);
  });

  it('is nothing between zones that are alike, all where nothing differs inside, and no share where nothing differs', () => {
    const share = (...groups: number[][]) => zoneDifferences(zones('a', groups), ['a'])[0]!.explained;
    expect([share([1, 3], [2, 2, 1, 3]), share([1, 1], [4, 4, 4]), share([2, 2], [2])]).toEqual([0, 1, null]);
  });
});
