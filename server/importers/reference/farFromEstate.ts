import type { LonLat } from '../../../shared/geo/coordinates.ts';
import type { ImportWarning } from '../understood.ts';
import { distanceKm } from './distance.ts';

/** Beyond this a layer is probably misplaced. */
const ALARM_KM = 2;

/** A warning when a place, given by positions around it, lies far from the estate; nothing when the estate's place is unknown. */
export function farWarning(positions: readonly LonLat[], estateLonLat: LonLat | null): ImportWarning[] {
  if (estateLonLat === null || positions.length === 0) return [];
  const km = distanceToBox(positions, estateLonLat);
  if (km <= ALARM_KM) return [];
  const shown = km < 10 ? Number(km.toFixed(1)) : Math.round(km);
  return [{ code: 'far-from-estate', text: `It lies ${shown} km from your estate. Check that it is the right file and that its reference system is the one it names.`, params: { km: shown } }];
}

/** To the nearest point of the box around the positions; 0 inside. */
function distanceToBox(positions: readonly LonLat[], [lon, lat]: LonLat): number {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [x, y] of positions) {
    west = Math.min(west, x);
    east = Math.max(east, x);
    south = Math.min(south, y);
    north = Math.max(north, y);
  }
  return distanceKm([lon, lat], [Math.min(Math.max(lon, west), east), Math.min(Math.max(lat, south), north)]);
}
