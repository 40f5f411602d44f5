import { gpx } from '@tmcw/togeojson';
import type { Geometry, Position } from 'geojson';
import { ImportProblem } from '../importProblem.ts';
import { distanceKm } from '../reference/distance.ts';
import type { ImportWarning } from '../understood.ts';
import { parseXml } from './parseXml.ts';
import type { RawFeature, RawLayer } from './rawLayer.ts';

/** A walk whose ends lie closer than this part of its length went round something. */
const CLOSED_PART = 0.2;

/**
 * Tracks and routes of a GPX 1.1 file: a walk that comes back to its start becomes an outline, others stay lines;
 * waypoints become points. Always WGS 84. Throws ImportProblem.
 */
export function readGpx(text: string, layerName: string): { layers: RawLayer[]; warnings: ImportWarning[] } {
  const collection = gpx(parseXml(text, 'gpx') as never) as { features: { geometry: Geometry | null; properties: Record<string, unknown> | null }[] };
  const warnings: ImportWarning[] = [];
  const features = collection.features.flatMap(({ geometry, properties }): RawFeature[] => {
    const name = typeof properties?.['name'] === 'string' ? properties['name'] : null;
    const lines = geometry?.type === 'LineString' ? [geometry.coordinates] : geometry?.type === 'MultiLineString' ? geometry.coordinates : null;
    if (lines === null) return [{ geometry, properties: { name } }];
    return lines.map((line) => ({ geometry: asOutline(line, name, warnings), properties: { name } }));
  });
  if (features.length === 0) throw new ImportProblem({ code: 'no-layer', fact: 'It holds no tracks and no points.', remedy: 'Record a walk around the block and export it again.' });
  return { layers: [{ name: layerName, features }], warnings };
}

function asOutline(line: readonly Position[], name: string | null, warnings: ImportWarning[]): Geometry {
  const positions = line.map((position): Position => [position[0]!, position[1]!]);
  const first = positions[0];
  const last = positions[positions.length - 1];
  const label = name === null ? 'A track' : `"${name.slice(0, 40)}"`;
  if (positions.length < 4 || first === undefined || last === undefined) return { type: 'LineString', coordinates: positions };
  const gapM = gap(first, last);
  const lengthM = positions.slice(1).reduce((sum, position, i) => sum + gap(positions[i]!, position), 0);
  if (gapM > CLOSED_PART * lengthM) {
    warnings.push({ code: 'open-track', text: `${label} does not come back to its start (${Math.round(gapM)} m are missing); it is kept as a line.`, params: { gapM: Math.round(gapM) } });
    return { type: 'LineString', coordinates: positions };
  }
  if (gapM > 1) warnings.push({ code: 'track-closed', text: `${label} ends ${Math.round(gapM)} m from its start; the outline is closed straight.`, params: { gapM: Math.round(gapM) } });
  return { type: 'Polygon', coordinates: [[...positions, first]] };
}

function gap(a: Position, b: Position): number {
  return distanceKm([a[0]!, a[1]!], [b[0]!, b[1]!]) * 1000;
}
