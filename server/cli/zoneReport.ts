import type { Feature, FeatureCollection, MultiPolygon } from 'geojson';
import type { Grid } from '../../shared/analysis/grid.ts';
import type { Zone, ZoningResult } from '../../shared/analysis/zoningTypes.ts';
import { polygonsArea } from '../../shared/geo/rings.ts';

/** What the command line writes: zones for a map (RFC 7946) and a report for a program or a careful reader. */

/** One feature a zone, in the order of their numbers. */
export function zonesGeoJson(zones: readonly Zone[]): FeatureCollection<MultiPolygon> {
  const features = zones.map((zone): Feature<MultiPolygon> => ({
    type: 'Feature',
    properties: {
      zone: zone.number,
      area_ha: rounded(zone.areaM2 / 10_000, 4),
      patches: zone.patches,
      doubtful_share: rounded(zone.doubtfulShare, 3),
      ...Object.fromEntries(zone.layers.flatMap(({ layerId, mean, sd }) => [[`${layerId}_mean`, mean === null ? null : significant(mean)], [`${layerId}_sd`, sd === null ? null : significant(sd)]])),
    },
    geometry: { type: 'MultiPolygon', coordinates: zone.polygonsLonLat as unknown as MultiPolygon['coordinates'] },
  }));
  return { type: 'FeatureCollection', features };
}

export interface ReportInput {
  readonly grid: Grid;
  readonly result: ZoningResult;
  readonly notes: Readonly<Record<string, readonly string[]>>;
  /** Seconds by stage in the order they were done. */
  readonly secondsPerStage: Readonly<Record<string, number>>;
  /** Files that a second thread read at the same time. */
  readonly secondsBeside: Readonly<Record<string, number>>;
  readonly peakMemoryMb: number;
}

export function zoningReport({ grid, result, notes, secondsPerStage, secondsBeside, peakMemoryMb }: ReportInput) {
  const chosen = result.candidates[result.chosenK - 1]!;
  const areaM2 = polygonsArea(grid.outlineXY);
  return {
    engineVersion: result.engineVersion,
    options: result.options,
    grid: { key: grid.key, epsg: grid.epsg, cellSizeM: grid.cellSizeM, cols: grid.cols, rows: grid.rows, cells: grid.inside.reduce((sum, inside) => sum + inside, 0), areaHa: areaM2 / 10_000 },
    verdict: result.verdict,
    fruit: result.fruit,
    zonesAdvised: result.advisedK,
    zonesChosen: result.chosenK,
    bestNumberAboveOne: result.bestSeveral,
    alsoWorthALook: result.alsoOffer,
    evidence: result.evidence,
    weights: result.weights,
    advisedWeights: result.advisedWeights,
    layerPairs: result.layerPairs,
    componentShares: result.componentShares,
    zones: chosen.zones.map(({ polygonsXY: _metres, polygonsLonLat: _degrees, ...zone }) => ({ ...zone, areaHa: zone.areaM2 / 10_000 })),
    differences: chosen.differences,
    candidates: result.candidates.map(({ k, zones, differences }) => ({ k, areasHa: zones.map((zone) => zone.areaM2 / 10_000), patches: zones.map((zone) => zone.patches), doubtfulShares: zones.map((zone) => zone.doubtfulShare), differences })),
    warnings: result.warnings,
    notes,
    secondsPerStage,
    secondsBeside,
    seconds: Object.values(secondsPerStage).reduce((sum, seconds) => sum + seconds, 0),
    peakMemoryMb,
  };
}

function rounded(value: number, decimals: number): number {
  return Number(value.toFixed(decimals));
}

function significant(value: number): number {
  return Number(value.toPrecision(7));
}
