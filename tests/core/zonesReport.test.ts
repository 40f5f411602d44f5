import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { inflateSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { hasTool } from '../api/support/gdal.ts';
import type { ReportLayer, ReportZone, ZoneReport } from '../../server/exporters/report/zoneReport.ts';
import { reportTexts } from '../../server/exporters/report/reportTexts.ts';
import { zonesReport } from '../../server/exporters/report/zonesReport.ts';
import { channels, zoneStyle } from '../../shared/catalog/zoneStyles.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';

const strip = (west: number): MultiPolygonLonLat => [[[[west, 43], [west + 0.001, 43], [west + 0.001, 43.001], [west, 43.001], [west, 43]]]] as unknown as MultiPolygonLonLat;
const layer = (layerId: string, over: Partial<ReportLayer> = {}): ReportLayer => ({ layerId, name: layerId, unit: '', decimals: 2, measuredOn: null, isContext: false, isClass: false, weight: 1, advised: 1, override: null, ...over });
const zone = (number: number, over: Partial<ReportZone> = {}): ReportZone => ({ number, name: '', colour: null, areaM2: 10_000, vines: 100, missing: 3, doubtfulShare: 0.17, means: [], polygonsLonLat: strip(3 + number / 1000), ...over });
const report = (zones: readonly ReportZone[], layers: readonly ReportLayer[]): ZoneReport => ({
  language: 'en', units: 'metric', size: 'A4', today: new Date('2026-07-01'), timeZone: 'UTC', estateName: 'Estate', blockName: 'Long strip', number: 2, name: '', state: 'draft', pastSeason: null, madeAt: new Date('2026-06-30'),
  verdict: 'several', isJudged: true, advisedZones: 3, fruitZones: null, shown: 3, warnings: [], reasons: [], numbers: [], layers, differences: [], layerPairs: [], zones, boundary: zones.flatMap(({ polygonsLonLat }) => polygonsLonLat), standsOut: null, epsg: 32631, cellSizeM: 2,
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

function textOf(input: ZoneReport): Promise<string> {
  const folder = mkdtempSync(join(tmpdir(), 'patchrow-report-'));
  return zonesReport(input).then((bytes) => {
    writeFileSync(join(folder, 'report.pdf'), bytes);
    return execFileSync('pdftotext', ['-layout', join(folder, 'report.pdf'), '-'], { encoding: 'utf8' });
  }).finally(() => rmSync(folder, { recursive: true, force: true }));
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

  it.skipIf(!hasTool('pdftotext'))('name the season of zones in force that is over', async () => {
    const inForce = (pastSeason: string | null) => textOf({ ...report([zone(1), zone(2)], [layer('Flight')]), state: 'live', pastSeason });
    expect(await inForce('2025')).toContain('Zoning 2: in force in 2025, made on');
    expect(await inForce(null)).toContain('Zoning 2: in force, made on');
  });

  it.skipIf(!hasTool('pdftotext'))('say that other zones are shown than those advised, what was warned of, and the ground of the whole', async () => {
    const input = { ...report([zone(1), zone(2)], [layer('Flight'), layer('Soil', { isClass: true }), layer('Height', { weight: 0 })]), shown: 2, reasons: [{ code: 'structure', about: null }], warnings: [{ code: 'rows-against-ground', about: null, figures: { share: 0.61 } }], differences: ['Flight', 'Height'].map((layerId) => ({ layerId, lowest: 1, highest: 2, withinSd: 0.5, explained: layerId === 'Flight' ? 0.62 : 0.07 })), layerPairs: [{ one: 'Flight', other: 'Height', correlation: -0.31 }] };
    const text = (await textOf({ ...input, zones: input.zones.map((one) => ({ ...one, means: [{ layerId: 'Soil', mean: 1.5, sd: 0.5 }] })) })).replace(/\s+/g, ' ');
    expect(text).toContain('Number of zones shown here: 2; advised: 3.');
    expect(text).toContain('61 % of the vines stand in another zone than their ground');
    expect(text).toMatch(/Long strip 2\.00 100 200 6/);
    // A class has no mean, and a layer without a vote explains nothing.
    expect(text).not.toContain('1.50');
    expect(text).toContain('Between zones Flight runs from 1.00 to 2.00');
    expect(text).not.toContain('Between zones Height');
    // Advised weights stand on the scale of those that were given: each a third of the two that were.
    // How much lies between zones is told of every layer of numbers, and the two most alike are named.
    expect(text).toMatch(/Flight – 1\.00 0\.67 62 Soil – 1\.00 0\.67 – Height – 0\.00 0\.67 7 /);
    expect(text).toContain('most alike are Flight and Height (Pearson’s correlation −0.31;');
  });

  it.skipIf(!hasTool('pdftotext')).each(['en', 'es', 'fr', 'it', 'pt'] as const)('write thousands as screens do, of four digits too, and break no word of a head: %s', async (language) => {
    const text = (await textOf({ ...report([zone(1, { vines: 8858 }), zone(2, { vines: 18_300 })], [layer('Flight')]), language })).replace(/\s/gu, ' ');
    // No word of a head is broken either.
    for (const head of [reportTexts[language].advised, reportTexts[language].doubtful]) expect(text).toContain(head);
    for (const figure of ['8 858', '18 300', '27 158']) expect(text).toContain(figure);
  });

  it.skipIf(!hasTool('pdftotext'))('tell of each zone how much of it is doubtful, and nothing where one zone has no other', async () => {
    const zones = [zone(1, { doubtfulShare: 0.174 }), zone(2, { doubtfulShare: null }), zone(3, { doubtfulShare: 0 })];
    const text = (await textOf(report(zones, [layer('Flight')]))).replace(/\s+/g, ' ');
    expect(text).toContain('Missing Doubtful, % Flight');
    expect(text).toMatch(/Zone 1 1\.00 33 100 3 17 – Zone 2 1\.00 33 100 3 – – Zone 3 1\.00 33 100 3 0 – Long strip 3\.00 100 300 9 Doubtful: vines/);
    for (const alone of [[zone(1)], zones.map((one) => ({ ...one, doubtfulShare: null }))]) expect(await textOf(report(alone, [layer('Flight')]))).not.toContain('Doubtful');
  });

  it.each(['en', 'es', 'fr', 'it', 'pt'] as const)('leave five zones of one layer with their reasons on one Letter page: %s', async (language) => {
    const reasons = ['structure', 'plateaus', 'not-tested-on-fruit'].map((code) => ({ code, about: null }));
    const zones = [1, 2, 3, 4, 5].map((number) => zone(number, { name: number === 3 ? 'Upper terrace, west' : '', means: [{ layerId: 'Flight', mean: 0.5, sd: 0.1 }] }));
    const bytes = await zonesReport({ ...report(zones, [layer('Flight')]), language, size: 'Letter', reasons, differences: [{ layerId: 'Flight', lowest: 1, highest: 2, withinSd: 0.5, explained: 0.62 }], borders: 'partRow', handEdits: 0 });
    expect(bytes.toString('latin1').match(/\/Type \/Page\b/gu)).toHaveLength(1);
  });
});
