import type { Geometry, MultiPolygon, Polygon } from 'geojson';
import type { GeometryRepair } from '../understood.ts';
import { areaHa } from './positions.ts';
import { findCrossings } from './selfCrossing.ts';

/** Above this a repair takes too long to offer. */
const MOST_CORNERS = 20_000;

/** Crossings that are mended, in one shape and in a file: each takes about a millisecond, and a scribble has tens of thousands. */
const MOST_CROSSINGS = 200;
const MOST_IN_FILE = 2000;

/** What mending may still cost in a file. */
export interface RepairBudget {
  crossings: number;
}

export const repairBudget = (): RepairBudget => ({ crossings: MOST_IN_FILE });

/** A polygon that crosses itself, with the place, its area now and after the repair. */
export async function checkPolygon(geometry: Geometry, { layer, feature, budget }: { layer: string; feature: number; budget: RepairBudget }): Promise<GeometryRepair | null> {
  if (geometry.type !== 'Polygon' && geometry.type !== 'MultiPolygon') return null;
  const polygons = geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
  const crossings = polygons.map((rings) => findCrossings(rings)).filter(({ first }) => first !== null);
  if (crossings.length === 0) return null;
  const place = crossings[0]!.first!;
  const count = crossings.reduce((sum, each) => sum + each.count, 0);
  budget.crossings -= Math.min(count, MOST_CROSSINGS);
  const repaired = count > MOST_CROSSINGS || budget.crossings < 0 ? null : await repairPolygon(geometry);
  return {
    layer,
    feature,
    problem: `The outline crosses itself ${count === 1 ? 'once' : count >= 1000 ? 'more than a thousand times' : `${count} times`}, first at ${place[1].toFixed(6)}, ${place[0].toFixed(6)}.`,
    placeLonLat: place,
    areaBeforeHa: areaHa(geometry),
    areaAfterHa: repaired === null ? NaN : areaHa(repaired),
    repaired,
  };
}

/** The area enclosed, without crossings: the polygon united with itself. Null when that is not possible. */
async function repairPolygon(geometry: Polygon | MultiPolygon): Promise<Polygon | MultiPolygon | null> {
  if (JSON.stringify(geometry.coordinates).length > MOST_CORNERS * 30) return null;
  try {
    // Loaded only when needed: it is large and most files are valid.
    const { featureCollection, feature, union } = await import('@turf/turf');
    return union(featureCollection<Polygon | MultiPolygon>([feature(geometry), feature(geometry)]))?.geometry ?? null;
  } catch {
    return null;
  }
}
