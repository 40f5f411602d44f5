import { describe, expect, it } from 'vitest';
import type { FieldMeasure, WalkStop } from '../../shared/contracts/rounds.ts';
import { standingOf } from '../../shared/field/enoughHere.ts';
import { dayBounds } from '../../shared/season/dayBounds.ts';
import { restrictionsAt, restrictionsNow } from '../../shared/field/entry.ts';
import { afterKey, isOdd, valueOf, type Key } from '../../shared/field/valueEntry.ts';
import { isStopDone, nextOpenStop, openAt, vineAt, type WalkEntry } from '../../shared/field/walkState.ts';

const measure: FieldMeasure = { code: 'brix', name: '', unit: '°Brix', decimals: 1, minimum: 5, maximum: 35, margin: 0.5, marginKind: 'absolute', confidence: 0.95, skewed: false, measuredIn: 'field' };
const stop = (number: number, over: Partial<WalkStop> = {}): WalkStop => ({
  targetId: `t${number}`, number, rowId: 'row', rowLabel: '4', rowLabelWas: null, ordinal: number * 10, vineNumber: number * 10, zone: 1, drawOrder: number, enterBy: 'start', heading: 'toEnd',
  ahead: 3, aheadFrom: 'entry', opensZone: false, measures: ['brix'], reserve: { rowId: 'row', rowLabel: '4', ordinal: number * 10 + 1, vineNumber: number * 10 + 1 }, ...over,
});
const reading = (number: number, code = 'brix'): WalkEntry => ({ id: `r${number}${code}`, kind: 'reading', targetId: `t${number}`, measureCode: code, rowId: 'row', ordinal: number * 10, at: '' });
const finding = (ordinal: number): WalkEntry => ({ id: `f${ordinal}`, kind: 'finding', targetId: null, measureCode: null, rowId: 'row', ordinal, at: '' });
const round = { stops: [stop(1), stop(2), stop(3)], measures: [measure], received: [] };

describe('the walk', () => {
  it('goes to the first open stop from where one is, and round to those passed over', () => {
    expect(nextOpenStop(round, [])).toBe(0);
    expect(nextOpenStop(round, [reading(1)])).toBe(1);
    expect(nextOpenStop(round, [reading(3)], 2)).toBe(0);
    expect(nextOpenStop(round, [reading(1), reading(2), reading(3)])).toBeNull();
  });

  it('names the reserve where something else stands, and passes on when that is gone too', () => {
    expect(vineAt(stop(2), [])).toMatchObject({ ordinal: 20, isReserve: false });
    expect(vineAt(stop(2), [finding(20)])).toMatchObject({ ordinal: 21, isReserve: true });
    expect(vineAt(stop(2), [finding(20), finding(21)])).toBeNull();
    expect(isStopDone(round, stop(2), [finding(20), finding(21)])).toBe(true);
    expect(vineAt(stop(2, { reserve: null }), [finding(20)])).toBeNull();
  });

  it('asks for what is read in the field and leaves the lab to the lab', () => {
    const lab: FieldMeasure = { ...measure, code: 'ph', measuredIn: 'lab' };
    const both = { ...round, measures: [measure, lab] };
    expect(openAt(both, stop(1, { measures: ['brix', 'ph'] }), []).map(({ code }) => code)).toEqual(['brix']);
    expect(openAt({ ...round, measures: [lab] }, stop(1, { measures: ['ph'] }), []).map(({ code }) => code)).toEqual(['ph']);
  });

  it('takes a walk over from another phone at the first vine that nothing was received of', () => {
    const received = [{ id: 'x', targetId: 't1', measureCode: 'brix', value: 22, zone: 1 }];
    expect(nextOpenStop({ ...round, received }, [])).toBe(1);
  });
});

describe('the keypad', () => {
  const type = (keys: string, decimals: number) => [...keys].reduce((text, key) => afterKey(text, (key === '.' ? 'point' : key === '<' ? 'back' : key) as Key, decimals), '');

  it.each([['28', 0, '28'], ['2.8', 0, '28'], ['22.45', 1, '22.4'], ['.5', 1, '0.5'], ['05', 0, '5'], ['0', 0, '0'], ['12<3', 0, '13'], ['1..2', 2, '1.2'], ['123456789', 0, '1234567']])('%s with %d decimals reads %s', (keys, decimals, text) => {
    expect(type(keys, decimals)).toBe(text);
  });

  it('knows nought from nothing and asks about what is out of range without refusing it', () => {
    expect(valueOf('0')).toBe(0);
    expect(valueOf('')).toBeNull();
    expect([4.9, 5, 35, 35.1].map((value) => isOdd(value, measure))).toEqual([true, false, false, true]);
  });
});

describe('enough here', () => {
  // Sequence and stop at 16 worked with R 4.2.2: t(0.975, 15)² · 0.83736² / 16 · (1 + 3/16) = 0.2364 ≤ 0.25; 0.2717 at 15.
  const values = [22.1, 23.4, 21.8, 24.0, 22.9, 23.1, 22.2, 24.3, 21.5, 23.0, 22.7, 23.6, 22.4, 23.9, 22.0, 23.3];
  const stops = Array.from({ length: 30 }, (_, i) => stop(i + 1));
  const zones = [{ number: 1, name: '', colour: null, vines: 1_000_000, targets: 30 }];
  const read = (count: number, first = 1) => values.slice(0, count).map((value, i) => ({ targetId: `t${first + i}`, measureCode: 'brix', value }));

  it('says so at the sixteenth of the draw, not before', () => {
    expect(standingOf({ stops, zones }, measure, 1, read(15)).say).toBe('goOn');
    expect(standingOf({ stops, zones }, measure, 1, read(16)).say).toBe('enough');
    expect(standingOf({ stops, zones }, measure, 1, read(9)).say).toBe('walkOn');
  });

  it('never lets one stop on vines that are not the first of the draw', () => {
    expect(standingOf({ stops, zones }, measure, 1, read(16, 2)).say).toBe('walkOn');
  });

  it('counts a corrected value once, the last one typed', () => {
    const state = standingOf({ stops, zones }, measure, 1, [{ targetId: 't1', measureCode: 'brix', value: 99 }, ...read(16)]).state;
    expect(state.n).toBe(16);
    expect(state.mean).toBeCloseTo(22.8875, 6);
  });

  it('says when every planned vine is read', () => {
    expect(standingOf({ stops: stops.slice(0, 6), zones }, measure, 1, read(6)).say).toBe('allRead');
  });
});

describe('entry restrictions on the phone', () => {
  const rule = (startsAt: string, endsAt: string, over: object = {}) => ({ startsAt, endsAt, rowIds: null as string[] | null, lifted: null as unknown, ...over });
  const at = { at: '2026-07-09T07:00:00Z', rowIds: ['a', 'b'] };

  it('gives the longest of several first', () => {
    const rules = [rule('2026-07-08T00:00:00Z', '2026-07-09T12:00:00Z'), rule('2026-07-08T00:00:00Z', '2026-07-11T00:00:00Z')];
    expect(restrictionsAt(rules, at).map(({ endsAt }) => endsAt)).toEqual(['2026-07-11T00:00:00Z', '2026-07-09T12:00:00Z']);
  });

  it('holds by the phone’s clock and by the server’s where the two differ: a clock that runs ahead opens no block early', () => {
    const rules = [rule('2026-07-09T06:00:00Z', '2026-07-09T08:00:00Z')];
    const by = (phone: string, offMin: number) => restrictionsNow(rules, { now: new Date(phone), clockOffMs: offMin * 60_000, rowIds: ['a', 'b'] }).length;
    // The server has 07:55; the phone, ten minutes ahead, shows 08:05.
    expect(by('2026-07-09T08:05:00Z', 10)).toBe(1);
    expect(by('2026-07-09T08:05:00Z', 0)).toBe(0);
    // The phone is a day behind, and the server has 07:00.
    expect(by('2026-07-08T07:00:00Z', -1440)).toBe(1);
    // Ten minutes behind, at 08:05 by the server: its own clock still says no.
    expect(by('2026-07-09T07:55:00Z', -10)).toBe(1);
    expect(by('2026-07-09T08:15:00Z', 10)).toBe(0);
  });

  it('holds for a day at the estate, which is longer or shorter where clocks are changed', () => {
    const iso = (zone: string, day: string) => Object.values(dayBounds(zone, day)).map((moment) => moment.toISOString());
    expect(iso('Pacific/Auckland', '2026-01-10')).toEqual(['2026-01-09T11:00:00.000Z', '2026-01-10T11:00:00.000Z']);
    // The clock goes forward on 29 March 2026 in the European Union, back on 25 October (Directive 2000/84/EC).
    expect(iso('Europe/Paris', '2026-03-29')).toEqual(['2026-03-28T23:00:00.000Z', '2026-03-29T22:00:00.000Z']);
    expect(iso('Europe/Paris', '2026-10-25')).toEqual(['2026-10-24T22:00:00.000Z', '2026-10-25T23:00:00.000Z']);
    expect(iso('Nowhere/Atall', '2026-01-10')).toEqual(['2026-01-10T00:00:00.000Z', '2026-01-11T00:00:00.000Z']);
  });

  it('holds from its first to its last moment, for its rows, until it is lifted', () => {
    expect(restrictionsAt([rule('2026-07-09T07:00:00Z', '2026-07-09T08:00:00Z')], at)).toHaveLength(1);
    expect(restrictionsAt([rule('2026-07-08T00:00:00Z', '2026-07-09T07:00:00Z')], at)).toHaveLength(0);
    expect(restrictionsAt([rule('2026-07-08T00:00:00Z', '2026-07-10T00:00:00Z', { rowIds: ['b'] })], at)).toHaveLength(1);
    expect(restrictionsAt([rule('2026-07-08T00:00:00Z', '2026-07-10T00:00:00Z', { rowIds: ['c'] })], at)).toHaveLength(0);
    expect(restrictionsAt([rule('2026-07-08T00:00:00Z', '2026-07-10T00:00:00Z', { lifted: { at: '' } })], at)).toHaveLength(0);
  });
});
