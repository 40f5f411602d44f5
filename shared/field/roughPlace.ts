import type { FieldRow } from '../contracts/rounds.ts';

/** Where the phone thinks it is. `accuracyM`: radius of the 95 % circle, as browsers give it (W3C Geolocation). */
export interface PhonePlace {
  readonly lon: number;
  readonly lat: number;
  readonly accuracyM: number;
}

/** The stretch of a row that the circle covers, in ordinals, and how far the row lies outside it. */
export interface RoughPlace {
  readonly centre: number;
  readonly radius: number;
  /** Metres between the circle and the row; 0 when it reaches the row. */
  readonly awayM: number;
}

/** Phones under leaves are 4 to 12 m off (in forests: Tomaštík et al. 2017, Forestry 90:187, from memory), and many claim less: a smaller circle is not believed. */
const leastReachM = 5;
const earthRadiusM = 6_371_008.8;

type RowEnds = Pick<FieldRow, 'firstOrdinal' | 'vineCount' | 'ends'>;

/**
 * Where along a row a phone roughly is; null for a row whose ends are not known. It never says in which row: rows stand
 * closer than a phone can tell. The row is taken as straight from first to last vine, in a plane at its first vine, which
 * over the width of a block errs by centimetres.
 */
export function roughPlace(row: RowEnds, place: PhonePlace): RoughPlace | null {
  const here = onRow(row, place);
  if (here === null) return null;
  const beyondM = Math.max(0, -here.alongM, here.alongM - here.lengthM);
  return { centre: row.firstOrdinal + here.alongM / here.stepM, radius: reachOf(place) / here.stepM, awayM: Math.max(0, Math.hypot(here.acrossM, beyondM) - reachOf(place)) };
}

/** Metres on the ground from the middle of the circle to a place near by (plane at its latitude). */
export function metresFrom({ lon, lat }: PhonePlace, [toLon, toLat]: readonly [number, number]): number {
  const rad = Math.PI / 180;
  return earthRadiusM * Math.hypot((toLat - lat) * rad, (toLon - lon) * rad * Math.cos(toLat * rad));
}

/** Zones of the vines that the circle covers, in order; none when it covers no vine of the block. */
export function zonesNear(rows: readonly FieldRow[], place: PhonePlace): number[] {
  const reachM = reachOf(place);
  const zones = rows.flatMap((row) => {
    const here = onRow(row, place);
    if (here === null || here.acrossM > reachM) return [];
    const half = Math.sqrt(reachM ** 2 - here.acrossM ** 2) / here.stepM;
    const centre = row.firstOrdinal + here.alongM / here.stepM;
    return row.runs.filter(({ from, to }) => to >= centre - half && from <= centre + half).map(({ zone }) => zone);
  });
  return [...new Set(zones)].filter((zone) => zone > 0).sort((a, b) => a - b);
}

const reachOf = ({ accuracyM }: PhonePlace) => Math.max(accuracyM, leastReachM);

function onRow({ ends, vineCount }: RowEnds, { lon, lat }: PhonePlace): { alongM: number; acrossM: number; lengthM: number; stepM: number } | null {
  if (!ends || vineCount < 2) return null;
  const [[lon0, lat0], [lon1, lat1]] = ends;
  const metres = (east: number, north: number) => [radians(east) * Math.cos(radians(lat0)) * earthRadiusM, radians(north) * earthRadiusM] as const;
  const [rowX, rowY] = metres(lon1 - lon0, lat1 - lat0);
  const [x, y] = metres(lon - lon0, lat - lat0);
  const lengthM = Math.hypot(rowX, rowY);
  if (lengthM === 0) return null;
  return { alongM: (x * rowX + y * rowY) / lengthM, acrossM: Math.abs(x * rowY - y * rowX) / lengthM, lengthM, stepM: lengthM / (vineCount - 1) };
}

const radians = (degrees: number) => (degrees * Math.PI) / 180;
