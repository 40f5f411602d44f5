import { describe, expect, it } from 'vitest';
import { inDayOrder } from '../../shared/field/dayOrder.ts';

describe('the work of a phone', () => {
  const work = (onDate: string, dayPlace: number | null = null) => ({ onDate, dayPlace });

  it('shows today first, then what comes, and what is late last', () => {
    const friday = work('2026-08-28');
    const days = [work('2026-09-04'), friday, work('2026-09-02'), work('2026-09-01', 2), work('2026-08-20'), work('2026-09-01', 1)];
    expect(inDayOrder(days, '2026-09-01').map(({ onDate, dayPlace }) => [onDate, dayPlace])).toEqual([
      ['2026-09-01', 1], ['2026-09-01', 2], ['2026-09-02', null], ['2026-09-04', null], ['2026-08-28', null], ['2026-08-20', null],
    ]);
    expect(inDayOrder(days, '2026-08-28')[0]).toBe(friday);
  });
});
