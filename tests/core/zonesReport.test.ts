import { inflateSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import type { ReportLayer, ReportZone, ZoneReport } from '../../server/exporters/report/zoneReport.ts';
import { zonesReport } from '../../server/exporters/report/zonesReport.ts';
import { channels, zoneStyle } from '../../shared/catalog/zoneStyles.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';

const strip = (west: number): MultiPolygonLonLat => [[[[west, 43], [west + 0.001, 43], [west + 0.001, 43.001], [west, 43.001], [west, 43]]]] as unknown as MultiPolygonLonLat;
const layer = (layerId: string, over: Partial<ReportLayer> = {}): ReportLayer => ({ layerId, name: layerId, unit: '', decimals: 2, measuredOn: null, isContext: false, isClass: false, weight: 1, advised: 1, override: null, ...over });
const zone = (number: number, over: Partial<ReportZone> = {}): ReportZone => ({ number, name: '', colour: null, areaM2: 10_000, vines: 100, missing: 3, means: [], polygonsLonLat: strip(3 + number / 1000), ...over });
const report = (zones: readonly ReportZone[], layers: readonly ReportLayer[]): ZoneReport => ({
  language: 'en', units: 'metric', size: 'A4', today: new Date('2026-07-01'), timeZone: 'UTC', estateName: 'Estate', blockName: 'Long strip', number: 2, name: '', state: 'draft', madeAt: new Date('2026-06-30'),
  verdict: 'several', isJudged: true, advisedZones: 3, fruitZones: null, reasons: [], numbers: [], layers, differences: [], zones, boundary: zones.flatMap(({ polygonsLonLat }) => polygonsLonLat), standsOut: null, epsg: 32631, cellSizeM: 2,
  engineVersion: '1', seed: 1, smoothingM: 3, smallestPatchHa: 0.05, borders: 'free', standardise: 'plain', principalComponents: false, together: [], handEdits: 1, beginsByHand: false,
});

/** Everything that is drawn, as operators. */
async function drawn(input: ZoneReport): Promise<string> {
  const source = (await zonesReport(input)).toString('latin1');
  return [...source.matchAll(/stream\n([\s\S]*?)\nendstream/gu)].flatMap(([, body]) => {
    try {
      return [inflateSync(Buffer.from(body!, 'latin1')).toString('latin1')];
    } catch {
      return [];
    }
  }).join('\n');
}

/** How often a colour is chosen to fill with. */
function fills(operators: string, colour: string): number {
  const [red, green, blue] = channels(colour).map((value) => value / 255);
  const chosen = [...operators.matchAll(/^([\d.]+) ([\d.]+) ([\d.]+) scn$/gmu)].map((found) => found.slice(1).map(Number));
  return chosen.filter(([r, g, b]) => Math.abs(r! - red!) + Math.abs(g! - green!) + Math.abs(b! - blue!) < 0.005).length;
}

describe('the printed zones', () => {
  it('have in their table the colours of the map where joining left a number out', async () => {
    const operators = await drawn(report([zone(1), zone(3)], [layer('Flight')]));
    const [low, high] = [1, 3].map((number) => zoneStyle(number, { count: 3 }).fill);
    expect(fills(operators, high!)).toBe(2);
    expect(fills(operators, low!)).toBe(2);
  });
});
