import { describe, expect, it } from 'vitest';
import type { Figure, LotSummary, LotView, LotZone } from '../../shared/contracts/lots.ts';
import { chanceText, figureText, tankChance, tankLoads } from '../../src/components/lots/lotFigures.ts';
import { freeRows, rowsBetween, withoutZone, withZone } from '../../src/components/lots/lotParts.ts';
import { createFormat } from '../../src/lib/format.ts';

const format = createFormat({ language: 'en', units: 'metric' });
const figure = (value: number, halfWidth: number): Figure => ({ value, halfWidth, standardError: halfWidth / 1.959964, n: null, confidence: 0.95, kind: 'estimated' });
const rows = ['1', '2', '3', '4'].map((label) => ({ id: `row ${label}`, label, free: label !== '4' }));
const zone = (zoneId: string, inLots: LotZone['inLots'] = []) => ({ zoneId, rows, inLots }) as unknown as LotZone;
const lot = (lines: { zoneId: string; rowIds: string[] | null }[], mustL: Figure | null = null, tankId: string | null = null) => ({ lines, tankId, summary: { mustL } as LotSummary }) as unknown as LotView;

describe('moving zones between lots', () => {
  it('keeps the rows of the other parts', () => {
    const parts = withZone(lot([{ zoneId: 'a', rowIds: ['row 1'] }]), zone('b'), null);
    expect(parts).toEqual([{ zoneId: 'a', rowIds: ['row 1'] }, { zoneId: 'b', rowIds: null }]);
  });

  it('adds rows to those of the zone that are in already, and calls all of them the whole zone', () => {
    const some = withZone(lot([{ zoneId: 'a', rowIds: ['row 1'] }]), zone('a'), ['row 2']);
    expect(some).toEqual([{ zoneId: 'a', rowIds: ['row 1', 'row 2'] }]);
    expect(withZone(lot(some as never), zone('a'), ['row 3', 'row 4'])).toEqual([{ zoneId: 'a', rowIds: null }]);
  });

  it('takes a zone out and leaves the rest', () => {
    expect(withoutZone(lot([{ zoneId: 'a', rowIds: null }, { zoneId: 'b', rowIds: null }]), 'a')).toEqual([{ zoneId: 'b', rowIds: null }]);
  });

  it('means the whole zone while nothing of it is taken, and the free rows afterwards', () => {
    expect(freeRows(zone('a'))).toBeNull();
    expect(freeRows(zone('a', [{ lotId: 'x', lotName: 'X', share: 0.25 }]))).toEqual(['row 1', 'row 2', 'row 3']);
  });

  it('takes rows from either end', () => {
    expect(rowsBetween(zone('a'), 'row 3', 'row 2')).toEqual(['row 2', 'row 3']);
    expect(rowsBetween(zone('a'), 'row 9', 'row 2')).toEqual([]);
  });
});

describe('tanks', () => {
  const tank = { id: 't4', name: 'T4', litres: 12_000, workingFill: 0.8, minimumFill: 0 };

  it('say 30 % for 9920 ± 1200 L of must in 12 000 L at 80 %', () => {
    // Normal distribution: P(X < 9600) with mean 9920 and sd 1200 / 1.959964 is 0.3006 (R 4.2.2, pnorm).
    const [load] = tankLoads([tank], [lot([], figure(9920, 1200), 't4')]);
    expect(load!.fit!.chanceOfFit).toBeCloseTo(0.3006, 4);
    expect(load!.must).toEqual({ value: 9920, low: 8720, high: 11_120 });
  });

  it('add up lots that share a tank, errors in squares', () => {
    const [load] = tankLoads([tank], [lot([], figure(4000, 300), 't4'), lot([], figure(5000, 400), 't4')]);
    expect(load!.must).toEqual({ value: 9000, low: 8500, high: 9500 });
  });

  it('of several lots are told with all that goes into them, and of one lot as it was reckoned for it', () => {
    const inTank = (id: string, mustL: Figure, chanceOfFit: number) => ({ id, name: id, tankId: 't4', lines: [], summary: { mustL, tank: { tankId: 't4', name: 'T4', workingL: 9600, chanceOfFit, chanceBelowMinimum: 0 } } }) as unknown as LotView;
    const [a, b] = [inTank('a', figure(4000, 300), 1), inTank('b', figure(5000, 400), 0.99)];
    expect(tankChance(a, [tank], [a])).toEqual({ chance: 1, tank: 'T4', others: [] });
    expect(tankLoads([tank], [b])[0]!.fit!.chanceOfFit).toBe(0.99);
    // Normal distribution: P(X < 9600) with mean 9000 and sd 500 / 1.959964 is 0.99066 (scipy 1.10.1, norm.cdf).
    const together = tankChance(b, [tank], [a, b])!;
    expect(together).toMatchObject({ tank: 'T4', others: ['a'] });
    expect(together.chance).toBeCloseTo(0.99066, 5);
  });

  it('are empty without a lot', () => {
    expect(tankLoads([tank], [lot([], figure(9920, 1200))])[0]).toMatchObject({ must: null, fit: null });
  });

  it('never promise that a lot fits, or that it does not', () => {
    expect(chanceText(1, format)).toBe('> 99\u202F%');
    expect(chanceText(0, format)).toBe('< 1\u202F%');
  });
});

describe('litres', () => {
  it('are told no finer than their range', () => {
    expect(figureText(figure(34_714, 10_097), { format, quantity: 'volume' })).toBe('35\u202F000\u202F±\u202F10\u202F000');
    expect(figureText(figure(8272, 2604), { format, quantity: 'volume' })).toBe('8\u202F300\u202F±\u202F2\u202F600');
  });
});
