/** What each zone is like: area, patches, mean and spread of every layer, share of doubtful cells. */

import type { Cells, Grid, Labels } from './grid.ts';
import type { ZonePolygons } from './polygonise.ts';
import { patchesPerZone } from './zoningClean.ts';
import type { CellZones } from './zoningFit.ts';
import type { Zone, ZoneDifference, ZoneLayerStats, ZoningLayer } from './zoningTypes.ts';

/** Above this the next zone's membership is more than half of the own zone's. */
export const DOUBTFUL_ABOVE = 0.5;

export interface ZoneStatsInput {
  readonly grid: Grid;
  readonly layers: readonly ZoningLayer[];
  readonly zones: CellZones;
}

/** Zones without polygons, areas taken from the cells. */
export function describeZones({ grid, layers, zones: { labels, doubt } }: ZoneStatsInput): Zone[] {
  const count = zoneCountOf(labels);
  const areas = cellAreas(grid, labels, count);
  const patches = patchesPerZone(grid, labels);
  const doubtful = doubtfulShares(labels, doubt, count);
  const stats = layers.map((layer) => ({ layer, byZone: momentsByZone(labels, layer.cells, count) }));
  return Array.from({ length: count }, (_, i) => {
    const number = i + 1;
    return {
      number,
      areaM2: areas[number]!,
      patches: patches[number]!,
      layers: stats.map(({ layer, byZone }): ZoneLayerStats => ({ layerId: layer.id, ...byZone[number]! })),
      doubtfulShare: doubtful[number]!,
      polygonsXY: null,
      polygonsLonLat: null,
    };
  });
}

/** The zones with their polygons and the areas of these; null leaves them out. */
export function withPolygons(zones: readonly Zone[], drawn: readonly ZonePolygons[] | null): Zone[] {
  return zones.map((zone) => {
    const polygons = drawn?.find((each) => each.zone === zone.number);
    return polygons === undefined ? zone : { ...zone, areaM2: polygons.areaM2, polygonsXY: polygons.polygonsXY, polygonsLonLat: polygons.polygonsLonLat };
  });
}

/** Highest zone number in use. */
export function zoneCountOf(labels: Labels): number {
  let highest = 0;
  for (let cell = 0; cell < labels.length; cell++) if (labels[cell]! > highest) highest = labels[cell]!;
  return highest;
}

/**
 * Lowest and highest zone mean of each of these layers of numbers, with the spread left within zones and the share of the variance
 * that lies between them: eta squared (Fisher 1925), which is 1 − the relative variance of Dobermann et al. 2003.
 */
export function zoneDifferences(zones: readonly { readonly layers: readonly ZoneLayerStats[] }[], layerIds: readonly string[]): ZoneDifference[] {
  return layerIds.flatMap((id) => {
    const stats = zones.flatMap((zone) => zone.layers.filter(({ layerId, mean }) => layerId === id && mean !== null));
    if (stats.length === 0) return [];
    const means = stats.map(({ mean }) => mean!);
    const count = stats.reduce((sum, { n }) => sum + n, 0);
    const within = stats.reduce((sum, { n, sd }) => sum + n * sd! * sd!, 0);
    const mean = stats.reduce((sum, { n, mean: own }) => sum + n * own!, 0) / count;
    const between = stats.reduce((sum, { n, mean: own }) => sum + n * (own! - mean) ** 2, 0);
    return [{ layerId: id, lowest: Math.min(...means), highest: Math.max(...means), withinSd: Math.sqrt(within / count), explained: between + within > 0 ? between / (between + within) : null }];
  });
}

function cellAreas({ share, cellSizeM }: Grid, labels: Labels, count: number): Float64Array {
  const areas = new Float64Array(count + 1);
  const wholeM2 = cellSizeM ** 2;
  for (let cell = 0; cell < labels.length; cell++) areas[labels[cell]!]! += share[cell]! * wholeM2;
  return areas;
}

function doubtfulShares(labels: Labels, doubt: Cells, count: number): Float64Array {
  const cells = new Float64Array(count + 1);
  const doubtful = new Float64Array(count + 1);
  countDoubtful(labels, doubt, { cells, doubtful });
  return doubtful.map((value, zone) => (cells[zone]! > 0 ? value / cells[zone]! : 0));
}

function countDoubtful(labels: Labels, doubt: Cells, { cells, doubtful }: { cells: Float64Array; doubtful: Float64Array }): void {
  for (let cell = 0; cell < labels.length; cell++) {
    const zone = labels[cell]!;
    cells[zone]! += 1;
    if (doubt[cell]! > DOUBTFUL_ABOVE) doubtful[zone]! += 1;
  }
}

function momentsByZone(labels: Labels, cells: Cells, count: number): { n: number; mean: number | null; sd: number | null }[] {
  const n = new Float64Array(count + 1);
  const sums = new Float64Array(count + 1);
  const squares = new Float64Array(count + 1);
  const origin = addMoments(labels, cells, { n, sums, squares });
  return Array.from(n, (cellCount, zone) => {
    if (cellCount === 0) return { n: 0, mean: null, sd: null };
    const mean = sums[zone]! / cellCount;
    return { n: cellCount, mean: origin + mean, sd: Math.sqrt(Math.max(0, squares[zone]! / cellCount - mean * mean)) };
  });
}

/** Adds numbers, sums and squares around the layer's first value, which keeps the digits of layers far from 0, such as elevation. Out: that value. */
function addMoments(labels: Labels, cells: Cells, { n, sums, squares }: { n: Float64Array; sums: Float64Array; squares: Float64Array }): number {
  let origin = NaN;
  for (let cell = 0; cell < labels.length; cell++) {
    const zone = labels[cell]!;
    if (zone === 0) continue;
    const value = cells[cell]!;
    if (Number.isNaN(value)) continue;
    if (Number.isNaN(origin)) origin = value;
    const above = value - origin;
    n[zone]! += 1;
    sums[zone]! += above;
    squares[zone]! += above * above;
  }
  return origin;
}
