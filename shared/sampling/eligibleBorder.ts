import type { GridFrame, Labels } from '../analysis/grid.ts';
import type { VineTable } from '../geo/vines.ts';

/**
 * 1 for each vine with a cell of another zone nearer than `bufferM`, else 0. A sensor's cell mixes both sides of a
 * border, so targets keep at least one cell away from it (common practice).
 */
export function vinesNearBorder(
  zones: { readonly grid: GridFrame; readonly labels: Labels },
  vines: Pick<VineTable, 'x' | 'y' | 'count'> & { readonly zoneOfVine: ArrayLike<number> },
  bufferM: number = zones.grid.cellSizeM,
): Uint8Array {
  const near = new Uint8Array(vines.count);
  for (let vine = 0; vine < vines.count; vine++) {
    const place = { x: vines.x[vine]!, y: vines.y[vine]!, zone: vines.zoneOfVine[vine]! };
    near[vine] = hasOtherZoneWithin(zones, place, bufferM) ? 1 : 0;
  }
  return near;
}

function hasOtherZoneWithin(
  { grid, labels }: { readonly grid: GridFrame; readonly labels: Labels },
  place: { readonly x: number; readonly y: number; readonly zone: number },
  bufferM: number,
): boolean {
  const cell = grid.cellSizeM;
  const u = place.x - grid.x0;
  const v = grid.y0 - place.y;
  const limit = (bufferM - 1e-9) ** 2;
  for (let row = Math.max(0, Math.floor((v - bufferM) / cell)); row <= Math.min(grid.rows - 1, Math.floor((v + bufferM) / cell)); row++) {
    const dv = Math.max(0, row * cell - v, v - (row + 1) * cell);
    for (let col = Math.max(0, Math.floor((u - bufferM) / cell)); col <= Math.min(grid.cols - 1, Math.floor((u + bufferM) / cell)); col++) {
      const label = labels[row * grid.cols + col]!;
      if (label === 0 || label === place.zone) continue;
      const du = Math.max(0, col * cell - u, u - (col + 1) * cell);
      if (du * du + dv * dv < limit) return true;
    }
  }
  return false;
}
