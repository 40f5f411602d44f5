import { describe, expect, it } from 'vitest';
import type { FieldMeasure, FieldRound, WalkStop } from '../../shared/contracts/rounds.ts';
import { vinesForBag } from '../../shared/field/bagVines.ts';
import { takenWalk } from '../../shared/field/takenWalk.ts';
import { isOthersStop, isStopDone, nextOpenStop, vineAt, type WalkEntry } from '../../shared/field/walkState.ts';
import { wayTo } from '../../shared/field/wayTo.ts';

const stop = (number: number, over: Partial<WalkStop> = {}): WalkStop => ({
  targetId: `t${number}`, number, rowId: 'row', rowLabel: '4', rowLabelWas: null, ordinal: number * 10, vineNumber: number * 10, zone: 1, drawOrder: number, enterBy: 'start', heading: 'toEnd',
  ahead: 3, aheadFrom: 'entry', opensZone: false, measures: ['brix'], reserve: { rowId: 'row', rowLabel: '4', ordinal: number * 10 + 1, vineNumber: number * 10 + 1 }, ...over,
});
const brix: FieldMeasure = { code: 'brix', name: '', unit: '°Brix', decimals: 1, minimum: 5, maximum: 35, margin: 0.5, marginKind: 'absolute', confidence: 0.95, skewed: false, measuredIn: 'lab' };
const count: FieldMeasure = { ...brix, code: 'clusterCount', measuredIn: 'field' };
const pick = (number: number): WalkEntry => ({ id: `p${number}`, kind: 'pick', targetId: `t${number}`, measureCode: null, rowId: 'row', ordinal: number * 10, at: '' });
const found = (ordinal: number): WalkEntry => ({ id: `f${ordinal}`, kind: 'finding', targetId: null, measureCode: null, rowId: 'row', ordinal, at: '' });

describe('a walk that is taken over', () => {
  const round = { stops: [stop(1)], received: [{ id: 'x', targetId: 't1', measureCode: 'brix', value: 1, zone: 1 }], doneTargetIds: ['t1', 't2'], others: [{ id: 'ana', name: 'Ana', stops: [stop(2), stop(3), stop(4), stop(5)] }] } as unknown as FieldRound;

  it('leaves out what the server knew as read', () => {
    expect(takenWalk(round, 'ana', null)!.stops.map(({ targetId }) => targetId)).toEqual(['t3', 't4', 't5']);
  });

  it('keeps a vine of which only a part is read, with the rest, and has it read at the reserve where the rest was', () => {
    const two = (number: number, over: Partial<WalkStop> = {}) => stop(number, { measures: ['clusterCount', 'pruningWeight', 'brix'], ...over });
    const measures = [count, { ...count, code: 'pruningWeight' }, brix];
    const read = (targetId: string, ...codes: string[]) => codes.map((measureCode) => ({ targetId, measureCode }));
    const half = { ...round, measures, readAsks: [...read('t2', 'clusterCount', 'pruningWeight'), ...read('t3', 'clusterCount')], others: [{ id: 'ana', name: 'Ana', stops: [two(2), two(3, { atReserve: true }), two(4)] }] } as unknown as FieldRound;
    const { stops } = takenWalk(half, 'ana', null)!;
    expect(stops.map(({ targetId, measures }) => [targetId, ...measures])).toEqual([['t3', 'pruningWeight', 'brix'], ['t4', 'clusterCount', 'pruningWeight', 'brix']]);
    expect(stops.map((one) => vineAt(one, [])!.ordinal)).toEqual([31, 40]);
    expect(vineAt(stops[0]!, [found(31)])).toBeNull();
  });

  it('begins where the walker says that the other had come to', () => {
    expect(takenWalk(round, 'ana', 't4')!.stops.map(({ targetId }) => targetId)).toEqual(['t4', 't5']);
    expect(takenWalk(round, 'ana', 'not there')!.stops).toHaveLength(3);
  });

  it('is not made up when the phone does not hold it', () => {
    expect(takenWalk(round, 'ben', null)).toBeNull();
  });
});

describe('the vines of a bag', () => {
  const round = { measures: [brix, count], stops: [stop(1), stop(2), stop(3, { measures: ['clusterCount'] }), stop(4, { zone: 2 })] };

  it('are those of the zone that were picked, a reserve for its target, and no vine that only is counted', () => {
    const entries = [pick(1), found(20), { ...pick(2), ordinal: 21 }, { ...pick(3) }, pick(4)];
    expect(vinesForBag(round, 1, { entries, inBags: [] })).toEqual([{ rowId: 'row', ordinal: 10 }, { rowId: 'row', ordinal: 21 }]);
    expect(vinesForBag(round, 2, { entries, inBags: [] })).toEqual([{ rowId: 'row', ordinal: 40 }]);
  });

  it('go into one bag only', () => {
    expect(vinesForBag(round, 1, { entries: [pick(1), pick(2)], inBags: [{ rowId: 'row', ordinal: 10 }] })).toEqual([{ rowId: 'row', ordinal: 20 }]);
  });

  it('end the stop for the lab, and leave what is read in the field open', () => {
    const lab = { measures: [brix], received: [] };
    expect(isStopDone(lab, stop(1), [])).toBe(false);
    expect(isStopDone(lab, stop(1), [pick(1)])).toBe(true);
    expect(isStopDone({ measures: [brix, count], received: [] }, stop(1, { measures: ['brix', 'clusterCount'] }), [pick(1)])).toBe(false);
  });
});

describe('the way to a vine', () => {
  const rows = [{ id: 'row', firstOrdinal: 1, vineCount: 100 }];
  const on = (over: Partial<WalkStop> = {}) => stop(3, { aheadFrom: 'lastVine', ahead: 12, ...over });
  const at = (rowId: string) => ({ rowId, rowLabel: '', ordinal: 18, vineNumber: 18, isReserve: false });

  it('goes on from the vine before, in its row or across the alley', () => {
    expect(wayTo(rows, on(), at('row'))).toEqual({ from: 'vineInRow', fromStart: true, ahead: 12 });
    expect(wayTo(rows, on(), at('next'))).toEqual({ from: 'vineAcross', fromStart: true, ahead: 12 });
    expect(wayTo(rows, stop(3, { ahead: 30 }), at('next'))).toEqual({ from: 'post', fromStart: true, ahead: 30 });
  });

  it('begins at the post for who has not stood at the vine before, counted from that post', () => {
    expect(wayTo(rows, on(), null)).toEqual({ from: 'post', fromStart: true, ahead: 30 });
    expect(wayTo(rows, on({ enterBy: 'end', heading: 'toStart' }), null)).toEqual({ from: 'post', fromStart: false, ahead: 71 });
  });
});

describe('a walk of which somebody else has read a part', () => {
  const mine = { measures: [count], received: [], readAsks: [{ targetId: 't1', measureCode: 'clusterCount' }, { targetId: 't2', measureCode: 'clusterCount' }] };
  const stops = [1, 2, 3].map((number) => stop(number, { measures: ['clusterCount'] }));
  const own: WalkEntry = { id: 'e', kind: 'reading', targetId: 't1', measureCode: 'clusterCount', rowId: 'row', ordinal: 10, at: '' };

  it('asks for the rest, and knows where one has not stood oneself', () => {
    expect(nextOpenStop({ ...mine, stops }, [own])).toBe(2);
    expect(stops.map((one) => isOthersStop(mine, one, [own]))).toEqual([false, true, false]);
  });

  it('asks for all of its own where the phone was told nothing', () => {
    expect(nextOpenStop({ ...mine, readAsks: undefined, stops }, [own])).toBe(1);
  });
});
