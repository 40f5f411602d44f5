import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { toUtm } from '../../shared/geo/utm.ts';

/** Units of length that are taken for one another: international feet and yards for metres, and the other way. */
const mixedUnits = [1 / 0.3048, 0.3048, 1 / 0.9144, 0.9144];
/** Lengths agree when they are this close (judgement). */
const tolerance = 0.03;

/**
 * A file whose outline has the shape of a block, or of all blocks together, but is 3.28 times as long and wide (or the
 * other way) was written in feet and read as metres. In: corners of the file, outlines of the blocks, zone to measure in.
 * Out: how many times as long, or null; never for a file as large as a block or as all of them.
 */
export function mixedScale(outlineLonLat: readonly LonLat[], outlines: readonly MultiPolygonLonLat[], epsg: number): number | null {
  const file = sides(outlineLonLat, epsg);
  const corners = outlines.map((polygons) => polygons.flat(2) as unknown as LonLat[]);
  const ratios = [...corners, corners.flat()].map((each) => sides(each, epsg)).map(([width, height]) => [file[0] / width, file[1] / height] as const);
  const isAbout = (ratio: number, times: number) => Math.abs(ratio / times - 1) <= tolerance;
  if (ratios.some(([across, down]) => across > 0.85 && across < 1.18 && down > 0.85 && down < 1.18)) return null;
  return mixedUnits.find((times) => ratios.some(([across, down]) => isAbout(across, times) && isAbout(down, times))) ?? null;
}

function sides(lonLat: readonly LonLat[], epsg: number): [width: number, height: number] {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const position of lonLat) {
    const [x, y] = toUtm(position, epsg);
    [west, east, south, north] = [Math.min(west, x), Math.max(east, x), Math.min(south, y), Math.max(north, y)];
  }
  return [east - west, north - south];
}
