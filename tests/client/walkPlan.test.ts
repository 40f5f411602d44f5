import { describe, expect, it } from 'vitest';
import { drawPlan } from '../../src/components/field/walkPlan.ts';
import type { FieldRound } from '../../shared/contracts/rounds.ts';

/** Two rows of eleven vines northwards, one second of longitude apart, at 45° N. */
const second = 1 / 3600;
const row = (id: string, east: number) => ({ id, label: id, firstOrdinal: 1, vineCount: 11, runs: [{ zone: 1, from: 1, to: 6 }, { zone: 2, from: 7, to: 11 }], known: [], ends: [[8 + east * second, 45], [8 + east * second, 45 + 4 * second]] });
const round = { rows: [row('a', 0), row('b', 1)], stops: [{ targetId: 't', number: 1, rowId: 'b', ordinal: 6 }] } as unknown as FieldRound;
const box = { width: 358, height: 460 };

describe('the block on a phone without a map', () => {
  it('is drawn north up within the screen, rows side by side', () => {
    const plan = drawPlan(round, null, box)!;
    expect(plan.width).toBeLessThanOrEqual(358);
    expect(plan.height).toBeCloseTo(460, 6);
    const [south, north] = [plan.runs[0]!.from, plan.runs[1]!.to];
    expect(south.y).toBeGreaterThan(north.y);
    expect(south.x).toBeCloseTo(north.x, 6);
    // A second of longitude is 0.7071 of one of latitude at 45° N.
    expect(plan.rowPx / ((south.y - north.y) / 4)).toBeCloseTo(Math.SQRT1_2, 3);
  });

  it('has each vine of the walk on its row', () => {
    const plan = drawPlan(round, null, box)!;
    expect(plan.stops[0]!.y).toBeCloseTo(230, 6);
    expect(plan.stops[0]!.x).toBeCloseTo(plan.runs[2]!.from.x, 6);
  });

  it('shows the phone’s place as a circle of its error, never as a dot, and not where the block is far', () => {
    const at = (north: number, accuracyM: number) => drawPlan(round, { lon: 8, lat: 45 + north * second, accuracyM }, box)!.rough;
    expect(at(2, 1)!.r).toBe(30);
    expect(at(2, 40)!.r).toBeGreaterThan(100);
    expect(at(60, 5)).toBeNull();
  });

  it('is nothing for a round without the ends of its rows', () => {
    expect(drawPlan({ ...round, rows: round.rows.map((one) => ({ ...one, ends: null })) }, null, box)).toBeNull();
  });
});
