import { describe, expect, it } from 'vitest';
import { cleanPoints } from '../../shared/analysis/cleanPoints.ts';
import { spikes } from '../../shared/analysis/pointSpikes.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';

/** A survey on rows 6 m apart with a reading every 3 m; two soils meet at 60 m. */
function survey(jump: number, seed: number) {
  const random = seededRandom(seed);
  const [x, y, value]: [number[], number[], number[]] = [[], [], []];
  for (let east = 0; east < 120; east += 6) {
    for (let north = 0; north < 90; north += 3) {
      x.push(east + 0.3 * randomNormal(random));
      y.push(north);
      value.push((east < 60 ? 20 : 20 + jump) + 2 * randomNormal(random));
    }
  }
  return { x: Float64Array.from(x), y: Float64Array.from(y), value: Float64Array.from(value) };
}

describe('spikes of a survey', () => {
  it('are the readings unlike all around them, high or low', () => {
    const points = survey(0, 1);
    const value = points.value.map((each, point) => (point === 40 ? 160 : point === 333 ? -40 : each));
    expect([...spikes({ ...points, value }).entries()].filter(([, spike]) => spike === 1).map(([point]) => point)).toEqual([40, 333]);
  });

  it('are not found in a survey without any, nor at a border between two soils', () => {
    for (const jump of [0, 10, 20]) expect(spikes(survey(jump, 2)).reduce((sum, spike) => sum + spike, 0)).toBeLessThanOrEqual(2);
  });

  it('are not looked for among points that stand alone', () => {
    const alone = { x: Float64Array.of(0, 500), y: Float64Array.of(0, 500), value: Float64Array.of(1, 100) };
    expect([...spikes(alone)]).toEqual([0, 0]);
    expect([...spikes({ x: new Float64Array(0), y: new Float64Array(0), value: new Float64Array(0) })]).toEqual([]);
  });

  it('are set aside when points are cleaned, and counted', () => {
    const points = survey(10, 3);
    const { kept, setAside } = cleanPoints({ ...points, value: points.value.map((each, point) => (point % 97 === 5 ? each * 6 : each)) }, { min: 0, max: 2000 });
    const { count } = setAside.find(({ reason }) => reason === 'spike')!;
    expect(count).toBeGreaterThanOrEqual(7); // every 97th of 600
    expect(count).toBeLessThanOrEqual(9);
    expect(kept.value.length).toBe(600 - count);
  });
});
