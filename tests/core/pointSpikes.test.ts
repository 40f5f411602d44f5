import { describe, expect, it } from 'vitest';
import { cleanPoints } from '../../shared/analysis/cleanPoints.ts';
import { oddSpeeds } from '../../shared/analysis/pointSpeeds.ts';
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

describe('the pace of a survey', () => {
  /** Rows 6 m apart driven up and down with a reading a metre; at `stops` the sensor crawls. */
  function drive(stops: readonly number[]) {
    const [x, y]: [number[], number[]] = [[], []];
    for (let line = 0; line < 10; line++) {
      for (let step = 0; step < 60; step++) {
        const crawl = stops.includes(x.length) ? 0.9 : 0;
        x.push(line * 6);
        y.push(line % 2 === 0 ? step - crawl : 59 - step + crawl);
      }
    }
    return { x: Float64Array.from(x), y: Float64Array.from(y), value: new Float64Array(x.length).fill(20) };
  }
  const odd = (found: Uint8Array) => [...found.entries()].filter(([, is]) => is === 1).map(([point]) => point);

  it('shows where the sensor crawled; the long way to the next row is no fault', () => {
    expect(odd(oddSpeeds(drive([]), null))).toEqual([]);
    expect(odd(oddSpeeds(drive([130, 250]), null))).toEqual([130, 250]);
  });

  it('shows a position that leapt away and back', () => {
    const points = drive([]);
    points.y[200] = 400;
    expect(odd(oddSpeeds(points, null))).toEqual([200]);
  });

  it('is read from the file where it gives speeds, in any unit', () => {
    const points = drive([]);
    const speed = points.x.map((_, point) => (point === 7 ? 0 : point === 9 ? 40 : 6 + (point % 3)));
    expect(odd(oddSpeeds(points, speed))).toEqual([7, 9]);
    expect(odd(oddSpeeds(points, speed.map((each) => each / 3.6)))).toEqual([7, 9]);
  });

  it('is not judged where points do not follow each other', () => {
    const { x, y, value } = drive([130]);
    const order = [...x.keys()].sort((a, b) => ((a * 7919) % 600) - ((b * 7919) % 600));
    const pick = (from: Float64Array) => Float64Array.from(order, (point) => from[point]!);
    expect(odd(oddSpeeds({ x: pick(x), y: pick(y), value: pick(value) }, null))).toEqual([]);
  });
});

describe('cleaning', () => {
  const points = { x: Float64Array.of(0, 5, 9, 30), y: Float64Array.of(0, 0, 0, 0), value: Float64Array.of(12, -3, 14, 13) };
  const isOutside = (x: number) => x > 20;

  it('names the reason of every point and its place in the file', () => {
    expect(cleanPoints(points, { min: 0, max: null, isOutside }).aside).toEqual([{ point: 1, reason: 'impossible' }, { point: 3, reason: 'outside' }]);
  });

  it('lets points count again whose reason was taken back, never those without a value', () => {
    expect([...cleanPoints(points, { min: 0, max: null, isOutside, off: ['outside'] }).kept.value]).toEqual([12, 14, 13]);
    expect(cleanPoints({ ...points, value: Float64Array.of(1, NaN, 2, 3) }, { min: 0, max: null, off: ['missing'] }).aside).toEqual([{ point: 1, reason: 'missing' }]);
  });
});
