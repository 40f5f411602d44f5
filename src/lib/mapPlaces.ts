import type { MultiPolygon, Polygon, Position } from 'geojson';

/** Places on outlines where marks and names go. Plane arithmetic in degrees, squeezed by latitude: for drawing only. */

type Area = Polygon | MultiPolygon;
export type Extent = [west: number, south: number, east: number, north: number];

export function ringsOf(area: Area): Position[][] {
  return area.type === 'Polygon' ? area.coordinates : area.coordinates.flat();
}

/** West, south, east, north of any areas; null when there are none. */
export function extentOf(areas: readonly Area[]): Extent | null {
  const all = areas.flatMap((area) => ringsOf(area).flat());
  if (all.length === 0) return null;
  return all.reduce<Extent>(
    (box, [lon, lat]) => [Math.min(box[0], lon!), Math.min(box[1], lat!), Math.max(box[2], lon!), Math.max(box[3], lat!)],
    [Infinity, Infinity, -Infinity, -Infinity],
  );
}

/** The point inside that lies farthest from every edge, found on a grid that is narrowed twice: where a number pill reads best. */
export function visualCentre(area: Area): [number, number] {
  const polygons = area.type === 'Polygon' ? [area.coordinates] : area.coordinates;
  const largest = [...polygons].sort((a, b) => ringArea(b[0]!) - ringArea(a[0]!))[0]!;
  const [west, south, east, north] = extentOf([{ type: 'Polygon', coordinates: largest }])!;
  const squeeze = Math.cos(((south + north) / 2) * (Math.PI / 180));
  let best = { lon: (west + east) / 2, lat: (south + north) / 2, room: -Infinity };
  let [spanLon, spanLat] = [east - west, north - south];
  for (let pass = 0; pass < 3; pass++) {
    const middle = best;
    for (let row = -8; row <= 8; row++) {
      for (let column = -8; column <= 8; column++) {
        const lon = middle.lon + (column / 16) * spanLon;
        const lat = middle.lat + (row / 16) * spanLat;
        const room = isInside(largest, lon, lat) ? edgeDistance(largest, { lon, lat, squeeze }) : -Infinity;
        if (room > best.room) best = { lon, lat, room };
      }
    }
    spanLon /= 6;
    spanLat /= 6;
  }
  return [best.lon, best.lat];
}

/** Where a block's name stands: above the outline, along the rows; `turnDeg` clockwise from level, upright when the rows are steeper than 46°. */
export function namePlace(area: Area, rowBearingDeg: number | null): { lonLat: [number, number]; turnDeg: number } {
  const points = ringsOf(area).flatMap(alongEdges);
  const [west, south, east, north] = extentOf([area])!;
  const squeeze = Math.cos(((south + north) / 2) * (Math.PI / 180));
  const [midLon, midLat] = [(west + east) / 2, (south + north) / 2];
  // Bearing 90 is level; past ±46° a turned name would have to be read with a bent neck.
  const lean = rowBearingDeg === null ? 0 : (((rowBearingDeg % 180) + 180) % 180) - 90;
  const turnDeg = Math.abs(lean) > 46 ? 0 : lean;
  const turn = (turnDeg * Math.PI) / 180;
  const along = { x: Math.cos(turn), y: -Math.sin(turn) };
  const up = { x: Math.sin(turn), y: Math.cos(turn) };
  const local = points.map(([lon, lat]) => ({ x: (lon! - midLon) * squeeze, y: lat! - midLat }));
  const alongs = local.map((point) => point.x * along.x + point.y * along.y);
  const [low, high] = [Math.min(...alongs), Math.max(...alongs)];
  const middle = (low + high) / 2;
  const near = local.filter((_, index) => Math.abs(alongs[index]! - middle) <= (high - low) * 0.32);
  const height = Math.max(...(near.length > 0 ? near : local).map((point) => point.x * up.x + point.y * up.y));
  const place = { x: along.x * middle + up.x * height, y: along.y * middle + up.y * height };
  return { lonLat: [midLon + place.x / squeeze, midLat + place.y], turnDeg };
}

/** Corners and places between them: a long straight edge has no corner where its name stands. */
function alongEdges(ring: Position[]): Position[] {
  const parts = 12;
  return ring.slice(1).flatMap((to, index) => {
    const from = ring[index]!;
    return Array.from({ length: parts }, (_, part) => [from[0]! + ((to[0]! - from[0]!) * part) / parts, from[1]! + ((to[1]! - from[1]!) * part) / parts]);
  });
}

function ringArea(ring: Position[]): number {
  return Math.abs(ring.reduce((sum, [x, y], index) => { const [nextX, nextY] = ring[(index + 1) % ring.length]!; return sum + x! * nextY! - nextX! * y!; }, 0)) / 2;
}

/** Even–odd rule over all rings, so that holes are outside. */
export function isInside(rings: Position[][], lon: number, lat: number): boolean {
  let inside = false;
  for (const ring of rings) {
    for (let at = 0, before = ring.length - 1; at < ring.length; before = at++) {
      const [x1, y1] = ring[at]!;
      const [x2, y2] = ring[before]!;
      if (y1! > lat !== y2! > lat && lon < ((x2! - x1!) * (lat - y1!)) / (y2! - y1!) + x1!) inside = !inside;
    }
  }
  return inside;
}

function edgeDistance(rings: Position[][], { lon, lat, squeeze }: { lon: number; lat: number; squeeze: number }): number {
  let least = Infinity;
  for (const ring of rings) {
    for (let at = 1; at < ring.length; at++) {
      const [x1, y1] = [(ring[at - 1]![0]! - lon) * squeeze, ring[at - 1]![1]! - lat];
      const [x2, y2] = [(ring[at]![0]! - lon) * squeeze, ring[at]![1]! - lat];
      const length = (x2 - x1) ** 2 + (y2 - y1) ** 2;
      const share = length === 0 ? 0 : Math.min(1, Math.max(0, -(x1 * (x2 - x1) + y1 * (y2 - y1)) / length));
      least = Math.min(least, Math.hypot(x1 + share * (x2 - x1), y1 + share * (y2 - y1)));
    }
  }
  return least;
}
