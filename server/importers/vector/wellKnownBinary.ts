import type { Geometry, Position } from 'geojson';

/**
 * Shapes as databases store them: well-known binary of OGC 06-103r4 with ISO type numbers; measures are left out.
 * Curved kinds whose pieces are all straight are read as what they are. Throws RangeError where the bytes end too early or a
 * count cannot be; null for true curves, which have no straight corners.
 */
export function readWellKnownBinary(bytes: Uint8Array): Geometry | null {
  return geometryAt({ view: new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength), at: 0, depth: 0 });
}

interface Cursor {
  view: DataView;
  at: number;
  depth: number;
}

const deepest = 8;
const parts = { 4: 'MultiPoint', 5: 'MultiLineString', 6: 'MultiPolygon', 7: 'GeometryCollection', 10: 'Polygon', 11: 'MultiLineString', 12: 'MultiPolygon' } as const;

function geometryAt(cursor: Cursor): Geometry | null {
  if (cursor.depth > deepest) throw new RangeError('nested too deep');
  const isLittle = cursor.view.getUint8(cursor.at) === 1;
  const code = cursor.view.getUint32(cursor.at + 1, isLittle);
  cursor.at += 5;
  const [type, extra] = [code % 1000, Math.floor(code / 1000)];
  // 1000 heights, 2000 measures, 3000 both.
  const shape = { isLittle, numbers: [2, 3, 3, 4][extra] ?? 0, hasHeights: extra === 1 || extra === 3 };
  if (shape.numbers === 0 || (type > 3 && !(type in parts)) || type < 1) return null;
  if (type === 1) {
    const position = positionAt(cursor, shape);
    return position.every(Number.isNaN) ? { type: 'Point', coordinates: [] } : { type: 'Point', coordinates: position };
  }
  if (type === 2) return { type: 'LineString', coordinates: positionsAt(cursor, shape) };
  if (type === 3) return { type: 'Polygon', coordinates: Array.from({ length: countAt(cursor, shape, 4) }, () => positionsAt(cursor, shape)) };
  return together(parts[type as keyof typeof parts], partsAt(cursor, shape));
}

interface Shape {
  isLittle: boolean;
  /** Numbers in a position. */
  numbers: number;
  /** The third number is a height. */
  hasHeights: boolean;
}

/** A count of things of at least `least` bytes each; one that the bytes cannot hold is a lie. */
function countAt(cursor: Cursor, { isLittle }: Shape, least: number): number {
  const count = cursor.view.getUint32(cursor.at, isLittle);
  cursor.at += 4;
  if (count * least > cursor.view.byteLength - cursor.at) throw new RangeError('a count larger than the shape');
  return count;
}

function positionsAt(cursor: Cursor, shape: Shape): Position[] {
  return Array.from({ length: countAt(cursor, shape, 8 * shape.numbers) }, () => positionAt(cursor, shape));
}

function positionAt(cursor: Cursor, { isLittle, numbers, hasHeights }: Shape): Position {
  const position = [cursor.view.getFloat64(cursor.at, isLittle), cursor.view.getFloat64(cursor.at + 8, isLittle), ...(hasHeights ? [cursor.view.getFloat64(cursor.at + 16, isLittle)] : [])];
  cursor.at += 8 * numbers;
  return position;
}

function partsAt(cursor: Cursor, shape: Shape): (Geometry | null)[] {
  const count = countAt(cursor, shape, 5);
  cursor.depth += 1;
  const found = Array.from({ length: count }, () => geometryAt(cursor));
  cursor.depth -= 1;
  return found;
}

function together(type: (typeof parts)[keyof typeof parts], found: readonly (Geometry | null)[]): Geometry | null {
  if (found.includes(null)) return null;
  const members = found as Geometry[];
  if (type === 'GeometryCollection') return { type, geometries: members };
  const coordinates = members.map((member) => (member as { coordinates: unknown }).coordinates);
  return { type, coordinates } as Geometry;
}
