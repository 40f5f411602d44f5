import { describe, expect, it } from 'vitest';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { repeatingPart, strongestWave, withoutWaves } from '../../shared/analysis/verdictWaves.ts';
import { evidenceField } from '../../shared/analysis/verdictField.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import type { ZoningLayer } from '../../shared/analysis/zoningTypes.ts';
import { added, smoothField, whiteField } from '../bench/simulatedFields.ts';

const CELL_M = 2;
const grid = gridOfOutline([[[[0, 0], [140, 0], [140, 140], [0, 140], [0, 0]]]], 32631, CELL_M);
const places = Float64Array.from({ length: grid.cols * grid.rows }, (_, cell) => cell);
const x = (cell: number) => (cell % grid.cols) + 0.5;
const y = (cell: number) => Math.floor(cell / grid.cols) + 0.5;

/** Bright and dark by turns, each half a wavelength wide, across an angle from east over south. */
function stripes(lengthM: number, degrees: number): Float64Array {
  const angle = (degrees * Math.PI) / 180;
  return places.map((cell) => {
    const cycles = ((x(cell) * Math.cos(angle) + y(cell) * Math.sin(angle)) * CELL_M) / lengthM;
    return cycles - Math.floor(cycles) < 0.5 ? 1 : -1;
  });
}

const fieldOf = (...layers: Float64Array[]) => evidenceField(grid, layers, {});
const patchyNoise = (seed: number) => {
  const random = seededRandom(seed);
  return added(whiteField(grid, random).map((value) => 0.7 * value), smoothField(grid, 9, random), 0.7);
};
const layerOf = (type: string, values: Float64Array): ZoningLayer => ({ id: type, type, role: 'evidence', kind: 'number', cells: Float32Array.from(values), weight: null });

describe('a wave across a block', () => {
  it.each([[8, 27], [11, 45], [6, 68], [20, 112]])('of %i m at %i° is found and taken off', (lengthM, degrees) => {
    const field = fieldOf(added(whiteField(grid, seededRandom(1)), stripes(lengthM, degrees), 1));
    const wave = strongestWave(field, field.layers[0]!, CELL_M / 30)!;
    const angle = (degrees * Math.PI) / 180;
    const sign = Math.sign(wave.x * Math.cos(angle) + wave.y * Math.sin(angle));
    // To a twentieth of a wave over the whole block.
    expect(Math.abs(sign * wave.x - (CELL_M / lengthM) * Math.cos(angle)) * grid.cols).toBeLessThan(0.05);
    expect(Math.abs(sign * wave.y - (CELL_M / lengthM) * Math.sin(angle)) * grid.cols).toBeLessThan(0.05);
    // The sine of a square wave has 8/π² of its variance, which is half of all here; cells blur the narrow ones.
    expect(wave.share).toBeGreaterThan(0.28);
    expect(wave.share).toBeLessThan(0.45);
    const rest = withoutWaves(field)!;
    expect(rest.evened).toEqual([true]);
    expect(strongestWave(field, rest.field.layers[0]!, CELL_M / 30)?.share ?? 0).toBeLessThan(0.05);
  });

  it('is what repeats with its phase, without the mean', () => {
    const plane = { width: 4, height: 1, mask: new Uint8Array([1, 1, 1, 1]) };
    expect([...repeatingPart(plane, [5, 1, 7, 3], { x: 0.5, y: 0 })]).toEqual([2, -2, 2, -2]);
  });

  it('shorter than two cells is found as the longer one that the cells show', () => {
    const field = fieldOf(added(whiteField(grid, seededRandom(2)), places.map((cell) => Math.sin(2 * Math.PI * 0.7 * x(cell))), 1));
    expect(Math.abs(strongestWave(field, field.layers[0]!, CELL_M / 30)!.x)).toBeCloseTo(0.3, 2);
  });

  it('is not seen in noise, in a strip, along a straight border or in a corner', () => {
    const part = (isInside: (cell: number) => boolean) => places.map((cell) => (isInside(cell) ? 6 : 0));
    const none = () => 0;
    const forms = [places.map(none), part((cell) => x(cell) > 40 && x(cell) < 47), part((cell) => x(cell) + 0.6 * y(cell) > 50), part((cell) => x(cell) < 15 && y(cell) < 15), part((cell) => Math.abs(x(cell) - y(cell)) < 6)];
    for (const seed of [1, 2, 3, 4]) {
      for (const form of forms) {
        expect(withoutWaves(fieldOf(added(whiteField(grid, seededRandom(seed)), form, 1)))).toBeNull();
        expect(withoutWaves(fieldOf(added(patchyNoise(seed), form, 1)))).toBeNull();
      }
    }
  });
});

describe('narrow stripes of a sensor across noise', () => {
  it.each([[8, 63], [8, 45], [6, 27]])('of %i m at %i° are no zones, in one layer or in two', (lengthM, degrees) => {
    for (const seed of [1, 2, 3]) {
      const striped = (at: number) => added(patchyNoise(10 * seed + at), stripes(lengthM, degrees), 4);
      for (const layers of [[layerOf('yield', striped(0))], [layerOf('yield', striped(0)), layerOf('conductivity', striped(1))]]) {
        const { verdict, advisedK } = makeZoning({ grid, layers });
        expect([verdict.verdict, advisedK]).toEqual(['one', 1]);
        expect(verdict.reasons.filter(({ code }) => code === 'stripes-evened').map(({ about }) => about)).toEqual(layers.map(({ id }) => id));
      }
    }
  });
});
