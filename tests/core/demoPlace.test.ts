import { describe, expect, it } from 'vitest';
import { demoDays, seasonOffsets } from '../../server/demo/demoDays.ts';
import { placeOn } from '../../server/demo/demoPlace.ts';

const dayMs = 86_400_000;
const everyDay = Array.from({ length: 366 }, (_, at) => new Date(Date.UTC(2028, 0, 1) + at * dayMs).toISOString().slice(0, 10));

describe('the demo estate', () => {
  it('never shows ripe fruit where it could not be on that day', () => {
    for (const today of everyDay) {
      const { anchorLonLat: [, lat] } = placeOn(today);
      const month = Number(today.slice(5, 7));
      // Away from the tropics grapes come to harvest from August to October in the north, from January to April in the south (common knowledge of the trade).
      if (lat > 23.4) expect([8, 9, 10], today).toContain(month);
      else if (lat < -23.4) expect([1, 2, 3, 4], today).toContain(month);
    }
    const places = new Set(everyDay.map((today) => placeOn(today).epsg));
    expect([...places].sort()).toEqual([32631, 32637, 32734]);
  });

  it('lies in the UTM zone of its place', () => {
    for (const today of everyDay) {
      const { anchorLonLat: [lon, lat], epsg } = placeOn(today);
      expect(epsg).toBe((lat < 0 ? 32_700 : 32_600) + Math.floor((lon + 180) / 6) + 1);
    }
  });

  it('stands between veraison and the pick of a season that holds today', () => {
    for (const today of ['2028-02-29', '2028-09-01', '2028-12-31']) {
      const now = new Date(`${today}T01:30:00Z`);
      const days = demoDays(today, now);
      expect(days.dawn < now).toBe(true);
      const { from, to, phases } = seasonOffsets(0);
      expect(days.day(from) <= today && today <= days.day(to)).toBe(true);
      expect(days.day(phases.veraison![1]) < today && today < days.day(phases.pick![0])).toBe(true);
    }
  });
});
