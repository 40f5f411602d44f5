import { describe, expect, it } from 'vitest';
import { roughPlace, zonesNear } from '../../shared/field/roughPlace.ts';
import type { FieldRow } from '../../shared/contracts/rounds.ts';

/** One arc second of latitude is 30.887 m on the mean sphere; a row of 101 vines along it, northwards from 45° N. */
const second = 1 / 3600;
const row = (over: Partial<FieldRow> = {}): FieldRow => ({ id: 'row', label: '4', firstOrdinal: 1, vineCount: 101, runs: [{ zone: 1, from: 1, to: 50 }, { zone: 2, from: 51, to: 101 }], known: [], ends: [[8, 45], [8, 45 + 4 * second]], ...over });
const at = (east: number, north: number, accuracyM = 8) => ({ lon: 8 + east * second, lat: 45 + north * second, accuracyM });

describe('a rough place along a row', () => {
  it('is a circle as wide as the phone is unsure, around the vine abreast of it', () => {
    const place = roughPlace(row(), at(0, 2))!;
    expect(place.centre).toBeCloseTo(51, 6);
    // 8 m at 123.55 m for a hundred steps.
    expect(place.radius).toBeCloseTo(6.475, 2);
    expect(place.awayM).toBe(0);
  });

  it('does not believe a phone that claims to know it to a metre', () => {
    expect(roughPlace(row(), at(0, 2, 1))!.radius).toBeCloseTo(4.047, 2);
  });

  it('says how far the row is when the circle does not reach it', () => {
    // One second of longitude at 45° N is 21.84 m.
    expect(roughPlace(row(), at(1, 2))!.awayM).toBeCloseTo(21.84 - 8, 1);
    expect(roughPlace(row(), at(0, 5))!.awayM).toBeCloseTo(30.887 - 8, 1);
  });

  it('counts ordinals from the first vine, also where a row was lengthened at its start', () => {
    expect(roughPlace(row({ firstOrdinal: -9 }), at(0, 0))!.centre).toBeCloseTo(-9, 6);
  });

  it('is nothing where the ends are not known', () => {
    expect(roughPlace(row({ ends: null }), at(0, 0))).toBeNull();
  });

  it('names the zones that the circle covers, and none far from the block', () => {
    expect(zonesNear([row()], at(0, 1))).toEqual([1]);
    expect(zonesNear([row()], at(0, 2))).toEqual([1, 2]);
    expect(zonesNear([row()], at(0.3, 3))).toEqual([2]);
    expect(zonesNear([row()], at(1, 2))).toEqual([]);
  });
});
