import { describe, expect, it } from 'vitest';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { layerLikeness } from '../../shared/analysis/layerShift.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';

// A block of 160 by 120 m with a slanting side, cells of 2 m.
const grid = gridOfOutline([[[[500_000, 4_700_000], [500_160, 4_700_000], [500_140, 4_700_120], [500_000, 4_700_120], [500_000, 4_700_000]]]], 32630, 2);
const random = seededRandom(11);
const waves = Array.from({ length: 40 }, () => ({ x: randomNormal(random) / 14, y: randomNormal(random) / 14, phase: 6.28 * random() }));
const ground = (x: number, y: number) => waves.reduce((sum, wave) => sum + Math.sin(wave.x * x + wave.y * y + wave.phase), 0);

/** The ground seen with an error of position in metres, and noise. */
function layer({ east = 0, north = 0, noise = 0.3, seed = 1 } = {}): Float32Array {
  const own = seededRandom(seed);
  return Float32Array.from({ length: grid.cols * grid.rows }, (_, cell) => {
    if (grid.inside[cell] !== 1) return NaN;
    const [x, y] = [(cell % grid.cols) * 2, -Math.floor(cell / grid.cols) * 2];
    return ground(x - east, y - north) + noise * randomNormal(own);
  });
}

describe('two layers of a block', () => {
  it('are called alike when they tell one story, and not moved', () => {
    const found = layerLikeness(grid, layer(), layer({ seed: 2 }))!;
    expect(found.correlation).toBeGreaterThan(0.95);
    expect(found.shift).toEqual({ eastM: 0, northM: 0 });
  });

  it('are told how far one lies off the other, to a metre, and in which direction to move it', () => {
    for (const [east, north] of [[6, 0], [0, -8], [5, 3]] as const) {
      const { shift } = layerLikeness(grid, layer(), layer({ east, north, seed: 3 }))!;
      expect(Math.abs(shift.eastM + east)).toBeLessThan(1);
      expect(Math.abs(shift.northM + north)).toBeLessThan(1);
    }
  });

  it('have no shift when they have nothing in common', () => {
    const noise = () => Float32Array.from({ length: grid.cols * grid.rows }, () => randomNormal(random));
    const found = layerLikeness(grid, noise(), noise())!;
    expect(Math.abs(found.correlation)).toBeLessThan(0.1);
    expect(found.shift).toEqual({ eastM: 0, northM: 0 });
  });

  it('have no shift when they are hills of their own, and likeness grows to the edge of the search', () => {
    const hill = (east: number, south: number, seed: number) => {
      const own = seededRandom(seed);
      return Float32Array.from({ length: grid.cols * grid.rows }, (_, cell) => (grid.inside[cell] === 1 ? Math.exp(-(((cell % grid.cols) * 2 - east) ** 2 + (Math.floor(cell / grid.cols) * 2 - south) ** 2) / (2 * 40 ** 2)) + 0.03 * randomNormal(own) : NaN));
    };
    const { correlation, shift } = layerLikeness(grid, hill(50, 60, 4), hill(90, 60, 5))!;
    expect(correlation).toBeLessThan(0.5);
    expect(shift).toEqual({ eastM: 0, northM: 0 });
  });

  it('are not compared where one is level or they hardly meet', () => {
    expect(layerLikeness(grid, layer(), new Float32Array(grid.cols * grid.rows).fill(5))).toBeNull();
    expect(layerLikeness(grid, layer(), new Float32Array(grid.cols * grid.rows).fill(NaN))).toBeNull();
  });
});
