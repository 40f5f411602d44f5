import type { Geometry, Position } from 'geojson';

/** What was put right without asking, because it changes no area. */
export interface CleaningNotes {
  closedRings: number;
  droppedHeights: number;
  /** Rings or lines with too few positions, and empty shapes. */
  droppedParts: number;
  /** Positions that are not numbers. */
  badPositions: number;
}

export function noNotes(): CleaningNotes {
  return { closedRings: 0, droppedHeights: 0, droppedParts: 0, badPositions: 0 };
}

/**
 * The geometry with two numbers a position, no position twice in a row, rings closed, and parts too small to be shapes
 * left out; null when nothing is left. `notes` counts what was done. Collections are flattened by the caller.
 */
export function cleanGeometry(geometry: Geometry, notes: CleaningNotes): Geometry | null {
  switch (geometry.type) {
    case 'Point': {
      const position = cleanPosition(geometry.coordinates, notes);
      return position === null ? null : { type: 'Point', coordinates: position };
    }
    case 'MultiPoint': {
      const positions = cleanPositions(geometry.coordinates, notes);
      return positions.length === 0 ? null : { type: 'MultiPoint', coordinates: positions };
    }
    case 'LineString': {
      const line = cleanLine(geometry.coordinates, notes);
      return line === null ? null : { type: 'LineString', coordinates: line };
    }
    case 'MultiLineString': {
      const lines = geometry.coordinates.map((line) => cleanLine(line, notes)).filter((line) => line !== null);
      return lines.length === 0 ? null : { type: 'MultiLineString', coordinates: lines };
    }
    case 'Polygon': {
      const rings = cleanRings(geometry.coordinates, notes);
      return rings === null ? null : { type: 'Polygon', coordinates: rings };
    }
    case 'MultiPolygon': {
      const polygons = geometry.coordinates.map((rings) => cleanRings(rings, notes)).filter((rings) => rings !== null);
      if (polygons.length === 0) return null;
      return polygons.length === 1 ? { type: 'Polygon', coordinates: polygons[0]! } : { type: 'MultiPolygon', coordinates: polygons };
    }
    default:
      notes.droppedParts++;
      return null;
  }
}

function cleanPosition(position: Position, notes: CleaningNotes): Position | null {
  if (!Array.isArray(position) || !Number.isFinite(position[0]) || !Number.isFinite(position[1])) {
    notes.badPositions++;
    return null;
  }
  if (position.length > 2) notes.droppedHeights++;
  return [position[0]!, position[1]!];
}

function cleanPositions(positions: readonly Position[], notes: CleaningNotes): Position[] {
  const out: Position[] = [];
  if (!Array.isArray(positions)) return out;
  for (const position of positions) {
    const clean = cleanPosition(position, notes);
    const last = out[out.length - 1];
    if (clean !== null && (last === undefined || last[0] !== clean[0] || last[1] !== clean[1])) out.push(clean);
  }
  return out;
}

function cleanLine(line: readonly Position[], notes: CleaningNotes): Position[] | null {
  const positions = cleanPositions(line, notes);
  if (positions.length >= 2) return positions;
  notes.droppedParts++;
  return null;
}

function cleanRings(rings: readonly (readonly Position[])[], notes: CleaningNotes): Position[][] | null {
  if (!Array.isArray(rings)) return null;
  const out: Position[][] = [];
  for (const [index, ring] of rings.entries()) {
    const positions = cleanPositions(ring, notes);
    const first = positions[0];
    const last = positions[positions.length - 1];
    const isOpen = first !== undefined && last !== undefined && (first[0] !== last[0] || first[1] !== last[1]);
    if (positions.length < (isOpen ? 3 : 4)) {
      notes.droppedParts++;
      if (index === 0) return null;
      continue;
    }
    if (isOpen) {
      positions.push([first[0]!, first[1]!]);
      notes.closedRings++;
    }
    out.push(positions);
  }
  return out.length === 0 ? null : out;
}
