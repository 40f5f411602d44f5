import { describe, expect, it } from 'vitest';
import { missingSeasons, seasonAround, vintageYear } from '../../shared/season/seasonAround.ts';

describe('seasons made for days of earlier years', () => {
  it('are one a year, with the months of the estate', () => {
    expect(missingSeasons(['2024-09-03', '2023-08-30', '2024-10-01'], [], 12)).toEqual([
      { name: '2023', startsOn: '2022-12-01', endsOn: '2023-11-30' },
      { name: '2024', startsOn: '2023-12-01', endsOn: '2024-11-30' },
    ]);
    expect(missingSeasons(['2024-03-05'], [], 7)).toEqual([{ name: '2023/24', startsOn: '2023-07-01', endsOn: '2024-06-30' }]);
  });

  it('leave days alone that a season holds, and are cut to the gap between two', () => {
    const seasons = [{ name: '2023', startsOn: '2022-11-15', endsOn: '2023-10-31' }, { name: '2024', startsOn: '2024-01-10', endsOn: '2024-11-30' }];
    expect(missingSeasons(['2023-09-01', '2024-01-10'], seasons, 12)).toEqual([]);
    expect(missingSeasons(['2023-12-24', '2023-11-05'], seasons, 12)).toEqual([
      { name: '2023 (2023-11-01)', startsOn: '2023-11-01', endsOn: '2023-11-30' },
      { name: '2024 (2023-12-01)', startsOn: '2023-12-01', endsOn: '2024-01-09' },
    ]);
  });

  it('ripen in the year that their name ends with', () => {
    const years = [[1, 2026], [4, 2026], [7, 2027], [9, 2027], [12, 2027]] as const;
    for (const [month, year] of years) expect(vintageYear(seasonAround('2026-12-15', month)), `season from month ${month}`).toBe(year);
  });
});
