import type { LonLat } from './coordinates.ts';
import type { BlockRows } from './rows.ts';
import { fromUtm, fromUtmPairs } from './utm.ts';
import { type VineTable, vineXY } from './vines.ts';

/** Longitude and latitude of one vine, or null when the block has no such row or vine. */
export function vineLonLat({ rows, epsg }: BlockRows, rowIndex: number, ordinal: number): LonLat | null {
  const row = rows[rowIndex];
  const xy = row === undefined ? null : vineXY(row, ordinal);
  return xy === null ? null : fromUtm(xy, epsg);
}

/** Longitudes and latitudes of all vines as pairs lon, lat, lon, lat ..., in the order of the table. */
export function vinePairsLonLat(table: VineTable, epsg: number): Float64Array {
  const pairs = new Float64Array(2 * table.count);
  for (let vine = 0; vine < table.count; vine++) {
    pairs[2 * vine] = table.x[vine]!;
    pairs[2 * vine + 1] = table.y[vine]!;
  }
  return fromUtmPairs(pairs, epsg);
}
