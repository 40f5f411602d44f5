import type { FieldRound } from '../../../shared/contracts/rounds.ts';
import type { PhonePlace } from '../../../shared/field/roughPlace.ts';

interface Point {
  readonly x: number;
  readonly y: number;
}

/** A block on a small screen, in pixels, north up: rows as runs of one zone, vines of the walk, the phone's rough place. */
export interface DrawnPlan {
  readonly width: number;
  readonly height: number;
  /** Pixels between neighbouring rows, for the width of their strokes. */
  readonly rowPx: number;
  readonly runs: readonly { readonly zone: number; readonly from: Point; readonly to: Point }[];
  readonly stops: readonly ({ readonly targetId: string; readonly number: number } & Point)[];
  readonly rough: (Point & { readonly r: number }) | null;
}

const edge = 16;
/** Smaller than this a circle would read as a dot, and a dot as knowledge. */
const leastCirclePx = 30;
const metresADegree = 111_195;

type Planned = Pick<FieldRound, 'rows' | 'stops'>;

/** Null where the rows' ends are not known, as on rounds kept before they were sent. Rows are straight from end to end. */
export function drawPlan({ rows, stops }: Planned, place: PhonePlace | null, most: { width: number; height: number }): DrawnPlan | null {
  const placed = rows.flatMap((row) => (row.ends ? [{ ...row, ends: row.ends }] : []));
  if (placed.length === 0) return null;
  const lonLats = placed.flatMap(({ ends }) => ends);
  const [west, north] = [Math.min(...lonLats.map(([lon]) => lon)), Math.max(...lonLats.map(([, lat]) => lat))];
  const [east, south] = [Math.max(...lonLats.map(([lon]) => lon)), Math.min(...lonLats.map(([, lat]) => lat))];
  const narrow = Math.cos((((north + south) / 2) * Math.PI) / 180);
  const [wide, high] = [(east - west) * narrow * metresADegree, (north - south) * metresADegree];
  const scale = Math.min((most.width - 2 * edge) / Math.max(wide, 1), (most.height - 2 * edge) / Math.max(high, 1));
  const at = ([lon, lat]: readonly [number, number]): Point => ({ x: edge + (lon - west) * narrow * metresADegree * scale, y: edge + (north - lat) * metresADegree * scale });
  const vineOf = (rowId: string, ordinal: number): Point | null => {
    const row = placed.find(({ id }) => id === rowId);
    if (!row) return null;
    const share = row.vineCount < 2 ? 0 : (ordinal - row.firstOrdinal) / (row.vineCount - 1);
    const [from, to] = [at(row.ends[0]), at(row.ends[1])];
    return { x: from.x + (to.x - from.x) * share, y: from.y + (to.y - from.y) * share };
  };
  const circle = place && { ...at([place.lon, place.lat]), r: Math.max(place.accuracyM * scale, leastCirclePx) };
  const [width, height] = [wide * scale + 2 * edge, high * scale + 2 * edge];
  return {
    width, height, rowPx: betweenRows(placed.map(({ ends }) => [at(ends[0]), at(ends[1])])),
    runs: placed.flatMap(({ id, runs }) => runs.map(({ zone, from, to }) => ({ zone, from: vineOf(id, from)!, to: vineOf(id, to)! }))),
    stops: stops.flatMap(({ targetId, number, rowId, ordinal }) => { const point = vineOf(rowId, ordinal); return point ? [{ targetId, number, ...point }] : []; }),
    rough: circle && circle.x + circle.r > 0 && circle.y + circle.r > 0 && circle.x - circle.r < width && circle.y - circle.r < height ? circle : null,
  };
}

/** The middle of the distances between the middles of neighbouring rows. */
function betweenRows(lines: readonly [Point, Point][]): number {
  const middles = lines.map(([from, to]) => ({ x: (from.x + to.x) / 2, y: (from.y + to.y) / 2 }));
  const gaps = middles.slice(1).map((middle, index) => Math.hypot(middle.x - middles[index]!.x, middle.y - middles[index]!.y)).sort((a, b) => a - b);
  return gaps[Math.floor(gaps.length / 2)] ?? 8;
}
