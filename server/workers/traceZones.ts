import type { Cells, Grid, Labels } from '../../shared/analysis/grid.ts';
import { polygonise } from '../../shared/analysis/polygonise.ts';
import { describeZones, withPolygons } from '../../shared/analysis/zoningStats.ts';
import type { Zone, ZoningLayer } from '../../shared/analysis/zoningTypes.ts';

export interface TraceInput {
  grid: Grid;
  labels: Labels;
  doubt: Cells;
  layers: ZoningLayer[];
}

/** Zones drawn from labels with their statistics; numbers without ground are left out. */
export function traceZones({ grid, labels, doubt, layers }: TraceInput): Zone[] {
  const drawn = polygonise(grid, labels);
  return withPolygons(describeZones({ grid, layers, zones: { labels, doubt } }), drawn).filter((zone) => zone.polygonsLonLat !== null);
}
