import { describe, expect, it } from 'vitest';
import { boundsHold, boundsOf } from '../../shared/geo/bounds.ts';
import { closeRing, isClosed, polygonsArea, polygonsCentroid, ringCentroid, signedArea, windForGeoJson, windForShapefile, type AnyRing } from '../../shared/geo/rings.ts';

const house: AnyRing = [[0, 0], [120, 0], [120, 80], [60, 110], [0, 80], [0, 0]];
const yard: AnyRing = [[20, 20], [20, 40], [50, 40], [50, 20], [20, 20]];
const reversed = (ring: AnyRing) => [...ring].reverse();

// Expected areas: by hand with the shoelace formula (rectangle 120 × 80 plus triangle 120 × 30 / 2, less 30 × 20).
describe('rings', () => {
  it('have a positive area when they run counter-clockwise', () => {
    expect(signedArea(house)).toBe(11400);
    expect(signedArea(reversed(house))).toBe(-11400);
    expect(signedArea(yard)).toBe(-600);
    expect(signedArea([[100, 0], [100, 1], [101, 1], [101, 0], [100, 0]])).toBe(-1);
  });

  it('lose the area of their holes whatever way they run', () => {
    for (const outer of [house, reversed(house)]) for (const hole of [yard, reversed(yard)]) expect(polygonsArea([[outer, hole]])).toBe(10800);
  });

  it('run counter-clockwise outside and clockwise inside for GeoJSON (RFC 7946), the other way for shapefiles', () => {
    for (const rings of [[house, yard], [reversed(house), reversed(yard)]]) {
      expect(windForGeoJson(rings).map((ring) => Math.sign(signedArea(ring)))).toEqual([1, -1]);
      expect(windForShapefile(rings).map((ring) => Math.sign(signedArea(ring)))).toEqual([-1, 1]);
    }
  });

  it('keep the digits of a small area far from the origin', () => {
    const far = house.map(([x, y]): [number, number] => [x + 600_000.25, y + 6_700_000.5]);
    expect(signedArea(far)).toBe(11400);
  });

  it('are closed when the first position is repeated', () => {
    const open: AnyRing = [[0, 0], [1, 0], [1, 1]];
    expect(isClosed(open)).toBe(false);
    expect(closeRing(open)).toEqual([[0, 0], [1, 0], [1, 1], [0, 0]]);
    expect(isClosed(closeRing(open))).toBe(true);
    expect(closeRing(house)).toBe(house);
  });

  it('have their centre of area, not the mean of their corners', () => {
    // Rectangle (60, 40) of 9600 and triangle (60, 90) of 1800, weighted.
    const [x, y] = ringCentroid(house);
    expect(x).toBeCloseTo(60, 10);
    expect(y).toBeCloseTo((40 * 9600 + 90 * 1800) / 11400, 10);
    expect(ringCentroid([[0, 0], [4, 0], [8, 0], [0, 0]])).toEqual([4, 0]);
  });

  it('share a centre weighted by area, holes taken off', () => {
    const left: AnyRing = [[0, 0], [2, 0], [2, 2], [0, 2], [0, 0]];
    const right: AnyRing = [[10, 0], [12, 0], [12, 4], [10, 4], [10, 0]];
    expect(polygonsCentroid([[left], [right]])[0]).toBeCloseTo((1 * 4 + 11 * 8) / 12, 10);
    const hole: AnyRing = [[0, 0], [0, 2], [1, 2], [1, 0], [0, 0]];
    expect(polygonsCentroid([[left, hole]])).toEqual([1.5, 1]);
  });

  it('lie in boxes', () => {
    expect(boundsOf([house, yard])).toEqual([0, 0, 120, 110]);
    expect(boundsHold(boundsOf([house]), boundsOf([yard]))).toBe(true);
    expect(boundsHold(boundsOf([yard]), boundsOf([house]))).toBe(false);
  });
});
