import { existsSync, readFileSync } from 'node:fs';
import initSqlJs from 'sql.js';
import { describe, expect, it } from 'vitest';
import { countsDownwards, heightSystemUnit } from '../../../server/importers/raster/heightSystems.ts';

/** The EPSG registry as PROJ ships it; Debian's proj-data puts it there. */
const registry = '/usr/share/proj/proj.db';
const units: Readonly<Record<string, string>> = { 9001: 'metre', 9002: 'foot', 9003: 'US survey foot' };

describe('height systems', () => {
  it('tell metres, feet and survey feet, and depths from heights', () => {
    expect([5703, 5711, 6360, 8228, 8052, 5702, 4326, 5754].map(heightSystemUnit)).toEqual(['metre', 'metre', 'US survey foot', 'foot', 'US survey foot', 'US survey foot', null, null]);
    expect([6358, 5831, 6360, 5703].map(countsDownwards)).toEqual([true, true, false, false]);
  });

  it.skipIf(!existsSync(registry))('are those of the EPSG registry', async () => {
    const { Database } = await initSqlJs();
    const rows = new Database(readFileSync(registry)).exec(`select v.code, a.uom_code, a.orientation from vertical_crs v
      join axis a on a.coordinate_system_auth_name = v.coordinate_system_auth_name and a.coordinate_system_code = v.coordinate_system_code
      where v.auth_name = 'EPSG'`)[0]!.values.map(([code, unit, orientation]) => [Number(code), units[String(unit)] ?? null, orientation === 'down'] as const);
    expect(rows.length).toBeGreaterThan(200);
    // The registry grows: a system newer than our list is not known, and must not be known wrongly.
    const wrong = rows.filter(([code, unit, down]) => heightSystemUnit(code) !== null && (heightSystemUnit(code) !== unit || countsDownwards(code) !== down));
    expect(wrong).toEqual([]);
    expect(rows.filter(([code, unit]) => unit !== null && heightSystemUnit(code) === null).length).toBeLessThan(40);
    const codes = new Set(rows.map(([code]) => code));
    const invented = Array.from({ length: 30_000 }, (_, code) => code).filter((code) => heightSystemUnit(code) !== null && !codes.has(code));
    expect(invented).toEqual([]);
  });
});
